import { fullOutput, type Gains } from '../../src/controller/settings.ts';
import type { TrialEvidence } from '../../src/learn/learnt.ts';
import { plantWith, responseOf } from '../../src/mechanism/plant-of.ts';
import type { Move, Profile } from '../../src/mechanism/profile.ts';
import type { PlantModel, ResponseModel } from '../../src/plant/response-model.ts';
import type { Samples } from '../../src/record/samples.ts';
import { normalNumbers } from '../../src/trial/chance.ts';
import { readingOf, simulateTrial } from '../../src/trial/simulate.ts';
import { starter } from '../fixtures/starters.ts';

/** A mechanism that answers as the response model says, off its nameplate by as much as the prior expects, or of unknown make. */
export interface Member {
  readonly profile: Profile;
  readonly truth: ResponseModel;
  readonly plant: PlantModel;
  readonly seed: number;
}

export interface Planned {
  readonly gains: Gains;
  readonly move: Move;
  readonly outputCap: number;
  readonly duration: number;
}

const NAMES = ['lift', 'drivetrain', 'arm', 'roller', 'turret', 'wrist'] as const;

/** The generator's state starts nearly empty, and its first numbers are far out for every seed: they are passed over. */
function chancesOf(seed: number, count: number): Float64Array {
  return normalNumbers(seed, PASSED_OVER + count).subarray(PASSED_OVER);
}

const PASSED_OVER = 16;

/** Member `index` of a fleet: seeded, made from the starter mechanisms. Every third is of unknown make. */
export function memberOf(index: number, seed: number): Member {
  const name = NAMES[index % NAMES.length] ?? 'lift';
  const own = 1000 * seed + index;
  const n = chancesOf(own, 16);
  const base = starter(name);
  const nameplate = responseOf(base);
  if (nameplate === null) throw new Error(`${name} has no nameplate`);
  const period = base.controller.period;
  const times = (value: number, sigma: number, at: number) => value * Math.exp(sigma * (n[at] ?? 0));
  const drag = times(nameplate.drag, 0.4, 2);
  const dragBack = times(drag, 0.15, 3);
  const ratio = 1 + times(0.35, 0.5, 4);
  const truth: ResponseModel = {
    topSpeed: times(nameplate.topSpeed, 0.25, 0),
    lag: times(nameplate.lag, 0.3, 1),
    drag,
    dragBack,
    breakaway: drag * ratio,
    breakawayBack: dragBack * ratio,
    hold: nameplate.hold * (1 + 0.25 * (n[5] ?? 0)),
    delay: period * Math.abs(0.8 * (n[6] ?? 0)),
  };
  const known = { ...base, sensor: { resolution: 0, delay: 0, ...base.sensor, noise: noiseOf(base, n) } };
  const plant: PlantModel = { ...plantWith(known, truth), coupling: null };
  if (index % 3 !== 2) return { profile: known, truth, plant, seed: own };
  const unknown: Profile = { ...known, motor: null, drive: null, friction: null, supply: null };
  return { profile: unknown, truth, plant: { ...plant, sag: 0, forceLimit: null }, seed: own };
}

/** Every other sensor is noisy, by about its own step. */
function noiseOf(profile: Profile, n: Float64Array): number {
  const step = profile.sensor?.resolution ?? 0;
  return (n[7] ?? 0) > 0 ? step * Math.min(2, n[7] ?? 0) : (profile.sensor?.noise ?? 0);
}

/** The trials of a run as a person might make them: little at first, then more; each about a third off what is best. */
export function trialOf(member: Member, trial: number): Planned {
  const { profile, truth } = member;
  const n = chancesOf(member.seed + 77 + 13 * trial, 4);
  const moves = profile.target.moves;
  const [start = 0, end = 0] = moves[trial % moves.length] ?? [];
  const size = trial === 0 ? 0.4 : 1;
  const move = { from: start, to: start + size * (end - start) };
  const full = fullOutput(profile.controller);
  const isSpeed = profile.quantity === 'speed';
  const dead = truth.delay + (profile.sensor?.delay ?? 0) + profile.controller.period;
  const off = Math.exp(0.3 * (n[0] ?? 0));
  const kp = isSpeed
    ? (0.35 * full * off * truth.lag) / (truth.topSpeed * dead)
    : (0.3 * full * off) / (truth.topSpeed * (dead + 0.3 * truth.lag));
  const outputCap = trial === 0 ? 0.4 : trial === 1 ? 0.7 : 1;
  const gains: Gains = {
    kp,
    ki: trial >= 1 ? (isSpeed ? kp / truth.lag : 0.8 * kp) * Math.exp(0.4 * (n[1] ?? 0)) : 0,
    kd: trial >= 2 && !isSpeed ? 0.3 * kp * truth.lag * Math.exp(0.4 * (n[2] ?? 0)) : 0,
    zone: isSpeed ? null : 0.1 * Math.abs(end - start),
    hold: truth.hold * full,
    pace: 0,
  };
  return { gains, move, outputCap, duration: Math.max(1.2, 1.5 * profile.target.settlingTime) };
}

export function run(member: Member, planned: Planned, seed: number): Samples {
  const { profile, plant } = member;
  return simulateTrial(
    { plant, reading: readingOf(profile) },
    { ...planned, controller: profile.controller, continuous: profile.continuous, shape: null },
    seed,
  );
}

export function evidenceOf(planned: Planned, samples: Samples): TrialEvidence {
  return { samples, gains: planned.gains, outputCap: planned.outputCap, move: planned.move };
}
