import type { Move } from '../mechanism/profile.ts';
import type { Samples } from '../record/samples.ts';
import { type Course, courseOf, straightMove } from './course.ts';
import { reversalsOf } from './reversals.ts';
import { swingOf } from './swing.ts';

/** What is measured on a trial; definitions in the design's model, section 3. Null = it has no value. Times in s. */
export interface Figures {
  readonly riseTime: number | null;
  /** %. */
  readonly overshoot: number;
  readonly peakTime: number | null;
  readonly settlingTime: number | null;
  /** Profile unit; null while it still moves at the end. */
  readonly restingError: number | null;
  readonly swingRatio: number | null;
  readonly swingPeriod: number | null;
  /** Share of the time to settling with output at its limit, 0 to 1. */
  readonly saturated: number;
  /** Output reversals a second larger than 2 % of full output; null without an output column. */
  readonly chatter: number | null;
  /** ∫|e| dt. */
  readonly iae: number;
  /** ∫t·|e| dt. */
  readonly itae: number;
  /** ∫u² dt with u a fraction of full output; null without an output column. */
  readonly effort: number | null;
}

export interface FigureOptions {
  readonly move: Move;
  /** Half-width of the band that counts as settled, profile unit. */
  readonly tolerance: number;
  /** Wrap width, or null. */
  readonly continuous: number | null;
  /** Largest output in force, output unit. */
  readonly outputLimit: number;
  /** Full output, output unit. */
  readonly fullOutput: number;
  /** One step of the sensor, profile unit. */
  readonly resolution: number;
  /** s inside the tolerance before the end that count as settled. */
  readonly dwell?: number;
}

/** s; the setpoint's step is at time 0 unless the record starts later. */
export const DWELL = 0.25;

/**
 * All figures of one recorded move. Crossings are found by linear interpolation between samples; time counts from the first
 * row at or after 0 (the setpoint's step).
 *
 * @param samples one move: at least two rows, time increasing
 * @throws {RangeError} when the record has fewer than two rows
 * Source: IEEE Std 181-2011 terms (transition duration, overshoot as a share of the amplitude; mem).
 */
export function figuresOf(samples: Samples, asked: FigureOptions): Figures {
  const options = { ...asked, move: straightMove(asked.move, asked.continuous) };
  return figuresAlong(courseOf(samples, options.move, options.continuous), samples, options);
}

/** {@link figuresOf} of a straight move whose course is already worked out; refuses what that refuses. */
export function figuresAlong(course: Course, samples: Samples, options: FigureOptions): Figures {
  if (samples.time.length < 2) throw new RangeError('a move needs at least two rows to be measured');
  const size = Math.abs(options.move.to - options.move.from) || 1;
  const start = Math.max(0, course.time[0] ?? 0);
  const settlingTime = settlingTimeOf(course, options, start);
  const peak = peakOf(course, start);
  const rest = restOf(course, options);
  const least = Math.max(3 * options.resolution, 0.01 * size) / size;
  const swing = swingOf(
    course.time,
    course.progress,
    1 - (rest.mean ?? 0) / (options.move.to - options.move.from || 1),
    least,
  );
  const { output } = samples;
  return {
    riseTime: riseTimeOf(course),
    overshoot: peak.overshoot,
    peakTime: peak.time,
    settlingTime,
    restingError: rest.still ? rest.mean : null,
    swingRatio: swing.ratio,
    swingPeriod: swing.period,
    saturated: output === null ? 0 : saturatedShare(samples.time, output, options, start, settlingTime),
    chatter: output === null ? null : reversalsOf(output, samples.time, 0.02 * options.fullOutput),
    iae: integral(course, start, () => 1),
    itae: integral(course, start, (t) => t),
    effort: output === null ? null : effortOf(samples.time, output, options.fullOutput),
  };
}

/** First crossing of 0.9 less first crossing of 0.1. */
function riseTimeOf(course: Course): number | null {
  const low = firstCrossing(course, 0.1);
  const high = firstCrossing(course, 0.9);
  return low === null || high === null ? null : high - low;
}

function firstCrossing({ time, progress }: Course, level: number): number | null {
  for (let row = 0; row < time.length; row++) {
    const now = progress[row] ?? 0;
    if (now < level) continue;
    if (row === 0) return time[0] ?? 0;
    const before = progress[row - 1] ?? 0;
    const t0 = time[row - 1] ?? 0;
    return t0 + ((level - before) / (now - before)) * ((time[row] ?? 0) - t0);
  }
  return null;
}

function peakOf({ time, progress }: Course, start: number): { overshoot: number; time: number | null } {
  let highest = 1;
  let at: number | null = null;
  for (let row = 0; row < time.length; row++) {
    if ((progress[row] ?? 0) > highest) {
      highest = progress[row] ?? 0;
      at = (time[row] ?? 0) - start;
    }
  }
  return { overshoot: 100 * (highest - 1), time: at };
}

/** Earliest time after which the error stays inside to the end; null when it does not end inside or not for long enough. */
function settlingTimeOf(course: Course, options: FigureOptions, start: number): number | null {
  const { time, error } = course;
  const last = time.length - 1;
  const end = time[last] ?? 0;
  const dwell = options.dwell ?? DWELL;
  let outside = last;
  while (outside >= 0 && Math.abs(error[outside] ?? 0) <= options.tolerance) outside--;
  if (outside === last) return null;
  if (outside < 0) return end - start >= dwell ? 0 : null;
  const entered = entryTime(
    time[outside] ?? 0,
    time[outside + 1] ?? 0,
    error[outside] ?? 0,
    error[outside + 1] ?? 0,
    options.tolerance,
  );
  return end - entered >= dwell - 1e-9 ? entered - start : null;
}

/**
 * When an error that goes from outside the tolerance to inside crossed the edge it was beyond, by linear interpolation.
 */
export function entryTime(t0: number, t1: number, outside: number, inside: number, tolerance: number): number {
  const edge = Math.sign(outside) * tolerance;
  return t0 + ((outside - edge) / (outside - inside || 1)) * (t1 - t0);
}

/** Mean error over the last fifth of the record, and whether the speed there is nil to the sensor's resolution. */
function restOf(course: Course, options: FigureOptions): { mean: number | null; still: boolean } {
  const { time, error } = course;
  const end = time.at(-1) ?? 0;
  const from = end - 0.2 * (end - (time[0] ?? 0));
  let sum = 0;
  let count = 0;
  let low = Number.POSITIVE_INFINITY;
  let high = Number.NEGATIVE_INFINITY;
  for (let row = 0; row < time.length; row++) {
    if ((time[row] ?? 0) < from) continue;
    const value = error[row] ?? 0;
    sum += value;
    count++;
    low = Math.min(low, value);
    high = Math.max(high, value);
  }
  if (count === 0) return { mean: null, still: false };
  const size = Math.abs(options.move.to - options.move.from);
  const still = high - low <= Math.max(2.01 * options.resolution, 0.1 * options.tolerance, 1e-3 * size);
  return { mean: sum / count, still };
}

function saturatedShare(
  time: Float64Array,
  output: Float64Array,
  options: FigureOptions,
  start: number,
  settlingTime: number | null,
): number {
  const until = settlingTime === null ? (time.at(-1) ?? 0) : start + settlingTime;
  const limit = options.outputLimit * (1 - 1e-6);
  let at = 0;
  let whole = 0;
  for (let row = 0; row + 1 < time.length && (time[row] ?? 0) < until; row++) {
    const dt = Math.min(time[row + 1] ?? 0, until) - (time[row] ?? 0);
    whole += dt;
    if (Math.abs(output[row] ?? 0) >= limit) at += dt;
  }
  return whole > 0 ? at / whole : 0;
}

/** ∫ weight(t)·|e| dt by trapezoids. */
function integral({ time, error }: Course, start: number, weight: (time: number) => number): number {
  let sum = 0;
  for (let row = 1; row < time.length; row++) {
    const t0 = time[row - 1] ?? 0;
    const t1 = time[row] ?? 0;
    sum +=
      0.5 *
      (t1 - t0) *
      (weight(t0 - start) * Math.abs(error[row - 1] ?? 0) + weight(t1 - start) * Math.abs(error[row] ?? 0));
  }
  return sum;
}

/** The output is held from row to row, so its square is summed, not interpolated. */
function effortOf(time: Float64Array, output: Float64Array, full: number): number {
  let sum = 0;
  for (let row = 0; row + 1 < time.length; row++) {
    sum += ((output[row] ?? 0) / full) ** 2 * ((time[row + 1] ?? 0) - (time[row] ?? 0));
  }
  return sum;
}
