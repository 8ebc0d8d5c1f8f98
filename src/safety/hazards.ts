import { fullOutput, type Gains } from '../controller/settings.ts';
import { rigidPlants } from '../mechanism/plant-of.ts';
import type { Move, Profile } from '../mechanism/profile.ts';
import { respond } from '../plant/respond.ts';
import type { PlantModel, ResponseModel } from '../plant/response-model.ts';
import { createTrialRunner, type TrialRunner } from '../trial/runner.ts';
import { readingOf } from '../trial/simulate.ts';
import { coastOpen, coastShorted } from './coasting.ts';
import { dropOf, kineticEnergy, rimSpeedOf, rotorShare } from './energies.ts';
import type { HazardFigures } from './hazard.ts';

/** s that a person takes to disable after seeing that something is wrong; design's safety, Figures. */
export const REACTION = 0.7;

/** The trial whose hazards are asked for. */
export interface PlannedTrial {
  readonly gains: Gains;
  readonly move: Move;
  /** s. */
  readonly duration: number;
  /** Fraction of full output. */
  readonly outputCap: number;
}

/**
 * What a trial could do, at the 99th percentile over what is known of the machine.
 *
 * @param draws  what the machine may be; null = nothing is known, and every figure that rests on it is not known
 */
export function hazardFiguresOf(
  profile: Profile,
  draws: readonly ResponseModel[] | null,
  trial: PlannedTrial,
): HazardFigures {
  const known = draws === null || draws.length === 0 ? null : excursionsOf(profile, draws, trial);
  const worst = (pick: (run: Excursion) => number) => {
    const value = known === null ? Number.NaN : percentile(known.map(pick), 0.99);
    return Number.isFinite(value) ? value : null;
  };
  const goesPlaces = profile.quantity === 'position' || profile.kind === 'travel' || profile.kind === 'lift';
  const topSpeed = worst((run) => run.topSpeed);
  const travelForward = goesPlaces ? worst((run) => run.forward) : null;
  const travelBack = goesPlaces ? worst((run) => run.back) : null;
  return {
    travelForward,
    travelBack,
    topSpeed,
    energy: topSpeed === null ? null : kineticEnergy(profile, topSpeed),
    energyIsLeast: rotorShare(profile) === null,
    coast: worst((run) => run.coast),
    coastShorted: worst((run) => run.coastShorted),
    drop: dropOf(
      profile,
      profile.quantity === 'speed' ? null : reachOf(profile, trial.move, travelForward, travelBack),
    ),
    rimSpeed: topSpeed === null ? null : rimSpeedOf(profile, topSpeed),
  };
}

/** Where the trial may take it, stops included; null when that is not known. */
function reachOf(
  { limits }: Profile,
  { from }: Move,
  forward: number | null,
  back: number | null,
): readonly [number, number] | null {
  if (forward === null || back === null) return null;
  const low = Math.max(limits.min ?? Number.NEGATIVE_INFINITY, from - back);
  return [low, Math.min(limits.max ?? Number.POSITIVE_INFINITY, from + forward)];
}

interface Excursion {
  readonly forward: number;
  readonly back: number;
  readonly topSpeed: number;
  readonly coast: number;
  readonly coastShorted: number;
}

function excursionsOf(profile: Profile, draws: readonly ResponseModel[], trial: PlannedTrial): readonly Excursion[] {
  const runner = createTrialRunner({
    controller: profile.controller,
    reading: { ...readingOf(profile), noise: 0, resolution: 0 },
    duration: trial.duration,
    continuous: profile.continuous,
    shape: null,
    seed: 0,
    // A trial that runs away is seen to its end: how far is the question.
    lostBeyond: null,
    parts: 'left out',
  });
  const of = profile.quantity === 'speed' ? speedExcursion : excursion;
  return rigidPlants(profile, draws).map((plant) =>
    of(profile, { ...plant, stops: { min: null, max: null } }, runner, trial),
  );
}

/**
 * How fast one draw of a speed loop runs, how far that takes it, a late disable and coasting included, and for how long (s; of
 * what goes along a line, how far) it runs on after disable.
 */
function speedExcursion(profile: Profile, plant: PlantModel, runner: TrialRunner, trial: PlannedTrial): Excursion {
  const rows = runner.run(plant, trial.gains, trial.move, trial.outputCap);
  const { measured, time } = runner.columns;
  let forward = 0;
  let back = 0;
  let fastest = 0;
  for (let row = 0; row < rows; row++) {
    const speed = measured[row] ?? 0;
    const gone = speed * ((time[row] ?? 0) - (time[row - 1] ?? 0));
    if (gone > 0) forward += gone;
    else back -= gone;
    if (Math.abs(speed) > Math.abs(fastest)) fastest = speed;
  }
  const open = coastOpen(plant.response, Math.abs(fastest));
  const shorted = coastShorted(plant.response, Math.abs(fastest));
  const late = Math.abs(fastest) * REACTION + open.distance;
  const along = profile.kind === 'travel' || profile.kind === 'lift';
  return {
    forward: forward + (fastest > 0 ? late : 0),
    back: back + (fastest < 0 ? late : 0),
    topSpeed: Math.abs(fastest),
    coast: along ? open.distance : open.time,
    coastShorted: along ? shorted.distance : shorted.time,
  };
}

/** How far, how fast and how long one draw goes: the trial, then a late disable at its fastest, then coasting or falling. */
function excursion(profile: Profile, plant: PlantModel, runner: TrialRunner, trial: PlannedTrial): Excursion {
  const rows = runner.run(plant, trial.gains, trial.move, trial.outputCap);
  const { measured, output, time } = runner.columns;
  const { from } = trial.move;
  let forward = 0;
  let back = 0;
  let fastest = 0;
  let at = 0;
  for (let row = 1; row < rows; row++) {
    const gone = (measured[row] ?? 0) - from;
    forward = Math.max(forward, gone);
    back = Math.max(back, -gone);
    const speed = ((measured[row] ?? 0) - (measured[row - 1] ?? 0)) / ((time[row] ?? 0) - (time[row - 1] ?? 0));
    if (Math.abs(speed) > Math.abs(fastest)) [fastest, at] = [speed, row];
  }
  // The worst moment to be late, two ways: the output stuck where it is, and the machine going on as fast as it went.
  const start = { position: measured[at] ?? from, speed: fastest };
  const stuck = runOn(plant, start, (output[at] ?? 0) / fullOutput(profile.controller));
  const steady = { position: start.position + fastest * REACTION, speed: fastest };
  const topSpeed = Math.max(Math.abs(fastest), Math.abs(stuck.speed));
  const coast = coastOpen(plant.response, topSpeed).distance;
  for (const { position, speed } of [stuck, steady]) {
    const rest = position + Math.sign(speed) * coastOpen(plant.response, Math.abs(speed)).distance - from;
    forward = Math.max(forward, rest);
    back = Math.max(back, -rest);
  }
  const fall = fallOf(profile, plant, [from - back, from + forward]);
  return {
    forward: Math.max(forward, fall.end - from),
    back: Math.max(back, from - fall.start),
    topSpeed,
    coast: Math.max(coast, fall.distance),
    coastShorted: Math.max(coastShorted(plant.response, topSpeed).distance, fall.distance),
  };
}

/** Position and speed after the reaction time with the output stuck. */
function runOn(plant: PlantModel, start: { position: number; speed: number }, output: number): typeof start {
  const moment = 1e-4;
  const time = Float64Array.of(0, REACTION - moment, REACTION);
  const stuck = { ...plant, response: { ...plant.response, delay: 0 } };
  const outputs = time.map(() => output);
  const [, before = start.position, position = start.position] = respond(stuck, start, time, outputs);
  return { position, speed: (position - before) / moment };
}

/**
 * Where weight takes it once nothing drives it: as far as the limit below, when its weight is more than its drag. A motor that
 * is shorted slows the fall and does not stop it.
 *
 * @returns ends of the reach with the fall in it, and the longest fall; without end where there is no limit below
 */
function fallOf(
  { limits }: Profile,
  { response, gravity }: PlantModel,
  [low, high]: readonly [number, number],
): { readonly start: number; readonly end: number; readonly distance: number } {
  const none = { start: low, end: high, distance: 0 };
  if (gravity.kind === 'none' || response.hold <= Math.min(response.drag, response.dragBack)) return none;
  const { level, radiansPerUnit } = gravity.kind === 'cosine' ? gravity : { level: 0, radiansPerUnit: 0 };
  const crest = Math.PI / 2;
  const weighs = (reading: number) => Math.cos((reading - level) * radiansPerUnit);
  // An arm whose reach crosses the upright can fall to either side.
  const over = radiansPerUnit > 0 && (high - level) * radiansPerUnit > crest && (low - level) * radiansPerUnit < crest;
  const falls = { back: over || weighs(low) > 0 || weighs(high) > 0, on: over || weighs(low) < 0 || weighs(high) < 0 };
  const start = falls.back ? Math.min(low, limits.min ?? Number.NEGATIVE_INFINITY) : low;
  const end = falls.on ? Math.max(high, limits.max ?? Number.POSITIVE_INFINITY) : high;
  const bounded = [Math.max(low, limits.min ?? low), Math.min(high, limits.max ?? high)] as const;
  const distance = Math.max(falls.back ? bounded[1] - start : 0, falls.on ? end - bounded[0] : 0);
  return { start, end, distance };
}

function percentile(values: readonly number[], share: number): number {
  const sorted = [...values].sort((a, b) => a - b);
  return sorted[Math.min(sorted.length - 1, Math.ceil(share * (sorted.length - 1)))] ?? 0;
}
