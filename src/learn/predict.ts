import type { Gains } from '../controller/settings.ts';
import { rigidPlants } from '../mechanism/plant-of.ts';
import type { Move, Profile } from '../mechanism/profile.ts';
import type { ResponseModel } from '../plant/response-model.ts';
import type { Band } from '../record/band.ts';
import type { Samples } from '../record/samples.ts';
import { createTrialRunner } from '../trial/runner.ts';
import { readingOf } from '../trial/simulate.ts';
import type { MoveShape } from '../trial/trial.ts';
import { unwrapped } from './readings.ts';

export interface PredictRequest {
  readonly profile: Profile;
  readonly draws: readonly ResponseModel[];
  /** One sigma of what the model leaves unexplained, profile unit. */
  readonly residual: number;
  readonly gains: Gains;
  readonly move: Move;
  /** s. */
  readonly duration: number;
  readonly outputCap: number;
  readonly shape?: MoveShape | null;
  readonly seed: number;
}

export interface Prediction {
  readonly band: Band;
  /** The draw's own trial that keeps nearest to the band's middle: unlike the middle, a response that can happen. */
  readonly response: Samples;
}

/** Rows by which a response may be early or late without being outside: a tick each way. */
const SLACK_ROWS = 1;

/**
 * The response to expect: each draw is run under the gains, and at each tick the 5th, 50th and 95th percentile taken, widened
 * by what the model leaves unexplained and by one tick of timing.
 */
export function predict(request: PredictRequest): Prediction {
  const { profile, draws, move } = request;
  const runner = createTrialRunner({
    controller: profile.controller,
    reading: { ...readingOf(profile), noise: 0 },
    duration: request.duration,
    continuous: profile.continuous,
    shape: request.shape ?? null,
    seed: request.seed,
    lostBeyond: null,
  });
  const rows = runner.columns.time.length;
  const courses = rigidPlants(profile, draws).map((plant) => {
    runner.run(plant, request.gains, move, request.outputCap);
    return { measured: runner.columns.measured.slice(0, rows), output: runner.columns.output.slice(0, rows) };
  });
  // What a fit leaves holds the sensor's noise and steps already; before any fit they stand alone.
  const noise =
    1.645 * Math.max(request.residual, profile.sensor?.noise ?? 0) + 0.5 * (profile.sensor?.resolution ?? 0);
  const low = new Float64Array(rows);
  const middle = new Float64Array(rows);
  const high = new Float64Array(rows);
  const values = new Float64Array(courses.length);
  for (let row = 0; row < rows; row++) {
    for (let draw = 0; draw < courses.length; draw++) values[draw] = courses[draw]?.measured[row] ?? 0;
    values.sort();
    low[row] = percentile(values, 0.05) - noise;
    middle[row] = percentile(values, 0.5);
    high[row] = percentile(values, 0.95) + noise;
  }
  const time = runner.columns.time.slice(0, rows);
  const nearest = courses.reduce((best, course) =>
    distance(course.measured, middle) < distance(best.measured, middle) ? course : best,
  );
  return {
    band: { time, low: spreadLow(low), middle, high: spreadHigh(high) },
    response: {
      ...nearest,
      time,
      setpoint: runner.columns.setpoint.slice(0, rows),
      supply: null,
      current: null,
      enabled: null,
      parts: null,
    },
  };
}

function distance(a: Float64Array, b: Float64Array): number {
  let sum = 0;
  for (let row = 0; row < a.length; row++) sum += ((a[row] ?? 0) - (b[row] ?? 0)) ** 2;
  return sum;
}

function percentile(sorted: Float64Array, share: number): number {
  const at = share * (sorted.length - 1);
  const below = Math.floor(at);
  const low = sorted[below] ?? 0;
  const high = sorted[Math.min(sorted.length - 1, below + 1)] ?? low;
  return low + (at - below) * (high - low);
}

const spreadLow = (values: Float64Array) => values.map((_, row) => around(values, row, Math.min));
const spreadHigh = (values: Float64Array) => values.map((_, row) => around(values, row, Math.max));

function around(values: Float64Array, row: number, pick: (a: number, b: number) => number): number {
  let picked = values[row] ?? 0;
  for (let other = Math.max(0, row - SLACK_ROWS); other <= Math.min(values.length - 1, row + SLACK_ROWS); other++) {
    picked = pick(picked, values[other] ?? picked);
  }
  return picked;
}

/** How a response compares with its promise. */
export interface BandCheck {
  readonly inside: boolean;
  /** Share of samples inside the band. */
  readonly share: number;
  /** Worst excursion beyond the band, in widths of the band there (at least a hundredth of the move). */
  readonly worst: number;
  /** First row outside; null = none. */
  readonly first: number | null;
}

/** Share of samples that must lie inside, and how far the others may stray: set so that nine in ten true promises hold. */
const LEAST_INSIDE = 0.98;
const MOST_ASTRAY = 0.5;

/** Did a response keep to its band? Rows are compared at the same time by linear interpolation of the band. */
export function inBand(samples: Samples, band: Band, continuous: number | null = null): BandCheck {
  const measured = unwrapped(samples.measured, continuous);
  let inside = 0;
  let worst = 0;
  let first: number | null = null;
  let rows = 0;
  let low = Number.POSITIVE_INFINITY;
  let high = Number.NEGATIVE_INFINITY;
  for (const value of band.middle) {
    low = Math.min(low, value);
    high = Math.max(high, value);
  }
  const least = 0.01 * (high - low);
  let at = 0;
  for (let row = 0; row < measured.length; row++) {
    const time = samples.time[row] ?? 0;
    if (time > (band.time.at(-1) ?? 0) + 1e-9) break;
    while (at + 2 < band.time.length && (band.time[at + 1] ?? 0) <= time) at++;
    const t0 = band.time[at] ?? 0;
    const t1 = band.time[at + 1] ?? t0;
    const share = t1 > t0 ? Math.min(1, Math.max(0, (time - t0) / (t1 - t0))) : 0;
    const between = (column: Float64Array) =>
      (column[at] ?? 0) + share * ((column[at + 1] ?? column[at] ?? 0) - (column[at] ?? 0));
    const bottom = between(band.low);
    const top = between(band.high);
    const value = measured[row] ?? 0;
    const beyond = Math.max(bottom - value, value - top, 0);
    rows++;
    if (beyond === 0) inside++;
    else {
      first ??= row;
      worst = Math.max(worst, beyond / Math.max(top - bottom, least));
    }
  }
  const share = rows === 0 ? 1 : inside / rows;
  return { inside: share >= LEAST_INSIDE && worst <= MOST_ASTRAY, share, worst, first };
}
