import type { Profile } from '../mechanism/profile.ts';
import type { ResponseModel } from '../plant/response-model.ts';
import type { Drive } from './evidence.ts';
import type { Residuals } from './least-squares.ts';
import { type Answers, answersTo } from './output-error.ts';
import {
  type Coordinates,
  decode,
  encode,
  type FitParameter,
  PARAMETERS,
  placeOf,
  straightened,
  unstraightened,
  type Valley,
} from './parameters.ts';

/** Trials against a prior, with the coordinates that the trials can move. */
export interface Problem {
  readonly drives: readonly Drive[];
  readonly answers: Answers;
  readonly coordinates: Coordinates;
  /** Places of the coordinates that are fitted; the rest stay at the prior's centre. */
  readonly free: readonly number[];
  /** Number of residuals. */
  readonly rows: number;
  /** All straightened coordinates; valid until the next call. */
  straightAt(parameters: Float64Array): Float64Array;
  /** The prior's coordinates of parameters (free coordinates, straightened); valid until the next call. */
  placeAt(parameters: Float64Array): Float64Array;
  modelAt(parameters: Float64Array): ResponseModel;
  parametersOf(model: ResponseModel): Float64Array;
}

/** How residuals are weighed: their deviation, trial by trial, and the share of them that is independent. */
export interface Weighing {
  readonly sigma: readonly number[];
  readonly independence: number;
}

export function problemOf(
  drives: readonly Drive[],
  profile: Profile,
  coordinates: Coordinates,
  rowShift: number,
): Problem {
  const way = wayOf(drives);
  const valley = valleyOf(drives, isFree(coordinates, 'hold') ? way : 0);
  const free = freeCoordinates(way, coordinates);
  const { delayBend } = coordinates;
  const straight = straightened(coordinates.centre, coordinates, valley);
  const at = coordinates.centre.slice();
  const straightAt = (parameters: Float64Array): Float64Array => {
    for (let k = 0; k < free.length; k++) straight[free[k] ?? 0] = parameters[k] ?? 0;
    return straight;
  };
  const placeAt = (parameters: Float64Array): Float64Array => {
    unstraightened(straightAt(parameters), coordinates, valley, at);
    // What is not free stays at the prior's centre, whatever the shear would make of it.
    for (let j = 0; j < at.length; j++) if (!free.includes(j)) at[j] = coordinates.centre[j] ?? 0;
    return at;
  };
  return {
    drives,
    answers: answersTo(drives, profile, rowShift),
    coordinates,
    free,
    rows: drives.reduce((sum, drive) => sum + drive.time.length + 1, 0) + free.length,
    straightAt,
    placeAt,
    modelAt: (parameters) => decode(placeAt(parameters), delayBend),
    parametersOf: (model) => {
      const whole = straightened(encode(model, delayBend), coordinates, valley);
      return Float64Array.from(free, (j) => whole[j] ?? 0);
    },
  };
}

function isFree({ deviations }: Coordinates, name: FitParameter): boolean {
  return (deviations[placeOf(name)] ?? 0) > 0;
}

/** Hold is free where the mechanism has weight; the two directions' drag where the trials went both ways. */
function freeCoordinates(way: number, coordinates: Coordinates): readonly number[] {
  const free = PARAMETERS.filter((name) => isFree(coordinates, name));
  const kept = Math.abs(way) < 1 ? free : free.filter((name) => name !== 'oneSided');
  return kept.map(placeOf);
}

/** Calls back for each row that shows motion, with what was travelled since the last such row (of a speed log, its speed). */
function eachMotion(drive: Drive, moved: (travelled: number, row: number) => void): void {
  const { quantity, measured, floor } = drive;
  let settled = measured[0] ?? 0;
  measured.forEach((value, row) => {
    const travelled = quantity === 'speed' ? value : value - settled;
    if (Math.abs(travelled) <= 6 * floor) return;
    moved(travelled, row);
    settled = value;
  });
}

/** 1 when all travel was forward, −1 when all was back, between them when both. */
function wayOf(drives: readonly Drive[]): number {
  let net = 0;
  let whole = 0;
  for (const drive of drives) {
    eachMotion(drive, (travelled) => {
      net += travelled;
      whole += Math.abs(travelled);
    });
  }
  return whole > 0 ? net / whole : 0;
}

/** Least usual output that speed is told apart from drag by. */
const LEAST_OUTPUT = 0.1;

function valleyOf(drives: readonly Drive[], weight: number): Valley {
  let squares = 0;
  let rows = 0;
  let spacing = 0;
  for (const drive of drives) {
    const { output, time } = drive;
    eachMotion(drive, (_, row) => {
      squares += (output[row] ?? 0) ** 2;
      rows++;
    });
    spacing += ((time.at(-1) ?? 0) - (time[0] ?? 0)) / (time.length - 1) / drives.length;
  }
  return { weight, output: Math.max(LEAST_OUTPUT, Math.sqrt(squares / Math.max(1, rows))), spacing };
}

/**
 * Residuals of the fit, in deviations: readings less answers, robust; each trial's own offset of its first reading; and what the
 * parameters are off the prior by.
 */
export function residualsOf(problem: Problem, { sigma, independence }: Weighing): Residuals {
  const { drives, answers, free } = problem;
  const { centre, deviations, delayBend } = problem.coordinates;
  return (parameters, into) => {
    const place = problem.placeAt(parameters);
    const model = decode(place, delayBend);
    const answered = answers.of(model);
    let at = 0;
    for (let index = 0; index < drives.length; index++) {
      const drive = drives[index];
      const answer = answered[index];
      if (drive && answer) at = fillTrial(into, at, drive, answer, model.lag, sigma[index] ?? 1, independence);
    }
    for (let k = 0; k < free.length; k++) {
      const j = free[k] ?? 0;
      into[at++] = ((place[j] ?? 0) - (centre[j] ?? 0)) / (deviations[j] ?? 1);
    }
  };
}

function fillTrial(
  into: Float64Array,
  at: number,
  drive: Drive,
  answer: Float64Array,
  lag: number,
  sigma: number,
  independence: number,
): number {
  const { measured, information, time } = drive;
  // What is left of an error of the first reading: all of it in position, what has not yet lagged away in speed.
  const rate = drive.quantity === 'speed' ? 1 / lag : 0;
  const offset = drive.startError > 0 ? offsetOf(drive, answer, rate, sigma, independence) : 0;
  const begin = time[0] ?? 0;
  for (let row = 0; row < measured.length; row++) {
    const worth = independence * (information[row] ?? 0);
    const start = rate === 0 ? offset : offset * Math.exp(-rate * ((time[row] ?? 0) - begin));
    const left = (measured[row] ?? 0) - (answer[row] ?? 0) - start;
    into[at++] = worth > 0 ? Math.sqrt(worth) * robust(left / sigma) : 0;
  }
  into[at++] = drive.startError > 0 ? offset / drive.startError : 0;
  return at;
}

/** How far the first reading, from which the answer starts, was off: as the readings tell, drawn to nil by the sensor's own error. */
function offsetOf(drive: Drive, answer: Float64Array, rate: number, sigma: number, independence: number): number {
  const { measured, information, time, startError } = drive;
  const begin = time[0] ?? 0;
  const most = 3 * sigma;
  let sum = 0;
  let weight = (sigma / startError) ** 2;
  for (let row = 0; row < measured.length; row++) {
    const shape = rate === 0 ? 1 : Math.exp(-rate * ((time[row] ?? 0) - begin));
    const worth = independence * (information[row] ?? 0) * shape;
    sum += worth * Math.max(-most, Math.min(most, (measured[row] ?? 0) - (answer[row] ?? 0)));
    weight += worth * shape;
  }
  return sum / weight;
}

/** Deviations up to which a residual counts by its square; beyond, by its size. */
const BEND = 3;

/** Pseudo-Huber. Huber, "Robust estimation of a location parameter", Ann. Math. Stat. 35 (1964) 73 (mem). */
function robust(residual: number): number {
  return residual * Math.sqrt(2 / (1 + Math.sqrt(1 + (residual / BEND) ** 2)));
}
