import { fullOutput, type Gains } from '../controller/settings.ts';
import { gravityOf, plantWith } from '../mechanism/plant-of.ts';
import type { Move, Profile } from '../mechanism/profile.ts';
import { unitScale } from '../mechanism/units.ts';
import { respond } from '../plant/respond.ts';
import type { PlantModel, ResponseModel } from '../plant/response-model.ts';
import { createTrialRunner } from '../trial/runner.ts';
import { readingOf } from '../trial/simulate.ts';
import type { HazardFigures } from './hazard.ts';

/** Standard acceleration of gravity, m/s² (ISO 80000-3; CGPM 1901). */
const GRAVITY = 9.80665;

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
  const runs =
    draws === null || draws.length === 0 ? null : draws.map((response) => excursionOf(profile, response, trial));
  const worst = (pick: (run: Excursion) => number) => (runs === null ? null : percentile(runs.map(pick), 0.99));
  const topSpeed = worst((run) => run.topSpeed);
  return {
    travelForward: profile.quantity === 'speed' ? null : worst((run) => run.forward),
    travelBack: profile.quantity === 'speed' ? null : worst((run) => run.back),
    topSpeed,
    energy: topSpeed === null ? null : kineticEnergy(profile, topSpeed),
    coast: worst((run) => run.coast),
    coastShorted: worst((run) => run.coastShorted),
    drop: dropOf(profile, trial.move),
    rimSpeed: topSpeed === null ? null : rimSpeedOf(profile, topSpeed),
  };
}

interface Excursion {
  readonly forward: number;
  readonly back: number;
  readonly topSpeed: number;
  readonly coast: number;
  readonly coastShorted: number;
}

/** How far, how fast and how long one draw goes: the trial, then a late disable at its fastest, then coasting. */
function excursionOf(profile: Profile, response: ResponseModel, trial: PlannedTrial): Excursion {
  const free = { ...plantWith(profile, response), stops: { min: null, max: null }, coupling: null };
  const runner = createTrialRunner({
    controller: profile.controller,
    reading: { ...readingOf(profile), noise: 0, resolution: 0 },
    duration: trial.duration,
    continuous: profile.continuous,
    shape: null,
    seed: 0,
    lostBeyond: 20,
    parts: 'left out',
  });
  const rows = runner.run(free, trial.gains, trial.move, trial.outputCap);
  const { measured, output, time } = runner.columns;
  const full = fullOutput(profile.controller);
  if (profile.quantity === 'speed') {
    let fastest = 0;
    for (let row = 0; row < rows; row++) fastest = Math.max(fastest, Math.abs(measured[row] ?? 0));
    return {
      forward: 0,
      back: 0,
      topSpeed: fastest,
      coast: coastOpen(response, fastest).time,
      coastShorted: coastShorted(response, fastest).time,
    };
  }
  let forward = 0;
  let back = 0;
  let fastest = 0;
  let at = 0;
  for (let row = 1; row < rows; row++) {
    const from = (measured[row] ?? 0) - trial.move.from;
    forward = Math.max(forward, from);
    back = Math.max(back, -from);
    const dt = (time[row] ?? 0) - (time[row - 1] ?? 0);
    const speed = ((measured[row] ?? 0) - (measured[row - 1] ?? 0)) / dt;
    if (Math.abs(speed) > Math.abs(fastest)) {
      fastest = speed;
      at = row;
    }
  }
  // The worst moment to be late: at its fastest, with the output stuck where it is, for the reaction time, then coasting.
  const state = runOn(free, { position: measured[at] ?? 0, speed: fastest }, (output[at] ?? 0) / full);
  const coasting = coastOpen(response, Math.abs(state.speed));
  const end = state.position + Math.sign(state.speed) * coasting.distance - trial.move.from;
  return {
    forward: Math.max(forward, end),
    back: Math.max(back, -end),
    topSpeed: Math.max(Math.abs(fastest), Math.abs(state.speed)),
    coast: coasting.distance,
    coastShorted: coastShorted(response, Math.abs(fastest)).distance,
  };
}

/** Position and speed after the reaction time with the output stuck. */
function runOn(plant: PlantModel, start: { position: number; speed: number }, output: number): typeof start {
  const moment = 1e-4;
  const time = Float64Array.of(0, REACTION - moment, REACTION);
  const stuck = { ...plant, response: { ...plant.response, delay: 0 } };
  const [, before = start.position, position = start.position] = respond(
    stuck,
    start,
    time,
    time.map(() => output),
  );
  return { position, speed: (position - before) / moment };
}

export interface Coast {
  /** s. */
  readonly time: number;
  /** Profile unit (for a speed loop: unit·s). */
  readonly distance: number;
}

/**
 * Coasting with the motor shorted: its own back-EMF and drag stop it.
 *
 * Source: closed form of τ·v′ = −v − K·c from v₀ to rest.
 */
export function coastShorted({ topSpeed, lag, drag }: ResponseModel, speed: number): Coast {
  const braking = topSpeed * drag;
  if (speed <= 0) return { time: 0, distance: 0 };
  if (braking <= 0) return { time: Number.POSITIVE_INFINITY, distance: lag * speed };
  const time = lag * Math.log1p(speed / braking);
  return { time, distance: lag * speed - braking * time };
}

/** Coasting with the motor open: drag alone stops it, at the constant rate K·c/τ (closed form). */
export function coastOpen({ topSpeed, lag, drag }: ResponseModel, speed: number): Coast {
  const rate = (topSpeed * drag) / lag;
  if (speed <= 0) return { time: 0, distance: 0 };
  if (rate <= 0) return { time: Number.POSITIVE_INFINITY, distance: Number.POSITIVE_INFINITY };
  return { time: speed / rate, distance: speed ** 2 / (2 * rate) };
}

/**
 * Kinetic energy, J: ½·m·v² or ½·J·ω², with the rotors' share through the reduction where it is known.
 *
 * @param speed profile unit/s, or the quantity itself for a speed loop
 * @returns null when mass or inertia is not known
 */
export function kineticEnergy(profile: Profile, speed: number): number | null {
  const { load, drive, motor, kind } = profile;
  const si = speed * unitScale(profile.unit).toSi;
  const line = kind === 'travel' || kind === 'lift';
  const own = line ? load?.mass : (load?.inertia ?? pointInertia(profile));
  if (own == null) return null;
  const rotors = (motor?.rotorInertia ?? 0) * (motor?.count ?? 0) * (drive?.reduction ?? 0) ** 2;
  const radius = drive?.radius ?? 1;
  const moving = own + (line ? rotors / radius ** 2 : rotors);
  return 0.5 * moving * si ** 2;
}

function pointInertia({ load }: Profile): number | null {
  if (load?.mass == null || load.centreOfMass === null) return null;
  return load.mass * load.centreOfMass ** 2;
}

/** Height to the lowest point it can fall to, what it gathers and how long it takes; null when it cannot fall or is not known. */
export function dropOf(profile: Profile, move: Move): HazardFigures['drop'] {
  const { load, limits, kind } = profile;
  if (load?.mass == null || limits.min === null) return null;
  const toSi = unitScale(profile.unit).toSi;
  const highest = Math.max(move.from, move.to);
  let height: number;
  if (kind === 'lift') height = (highest - limits.min) * toSi;
  else if (kind === 'arm' && load.centreOfMass !== null) {
    const gravity = gravityOf(profile);
    const level = gravity.kind === 'cosine' ? gravity.level : 0;
    const rise = (reading: number) => Math.sin((reading - level) * toSi) * (load.centreOfMass ?? 0);
    height = rise(highest) - rise(limits.min);
  } else return null;
  if (height <= 0) return null;
  return { height, energy: load.mass * GRAVITY * height, time: Math.sqrt((2 * height) / GRAVITY) };
}

/** m/s at the rim of what spins; null when its radius is not known. */
export function rimSpeedOf(profile: Profile, speed: number): number | null {
  const radius = profile.drive?.radius ?? null;
  if (profile.kind !== 'spin' || radius === null) return null;
  return speed * unitScale(profile.unit).toSi * radius;
}

function percentile(values: readonly number[], share: number): number {
  const sorted = [...values].sort((a, b) => a - b);
  return sorted[Math.min(sorted.length - 1, Math.ceil(share * (sorted.length - 1)))] ?? 0;
}
