import { Matrix, SingularValueDecomposition } from 'ml-matrix';
import { plantWith } from '../mechanism/plant-of.ts';
import type { Profile } from '../mechanism/profile.ts';
import type { ResponseModel } from '../plant/response-model.ts';
import type { Drive } from './evidence.ts';

/** Dead times tried, in ticks. */
const DEAD_TICKS = [0, 0.25, 0.5, 1, 1.5, 2, 3, 4, 6, 9];

/**
 * Response models by linear regression on the equation of motion, integrated once so that no acceleration is needed:
 *
 *   ∫φ·v dt + τ·(v − v₀) = K·∫φ·u dt − K·c₊·(time forward) + K·c₋·(time back) − K·h·(time moving)
 *
 * taken over the time in which it moves. Biased by the sensor's steps, but near enough to start a fit from, and without valleys
 * to be caught in.
 *
 * @returns one a dead time tried, best first; only those that are possible machines
 */
export function regressedModels(
  drives: readonly Drive[],
  profile: Profile,
  rowShift: number,
  prior: ResponseModel,
): readonly ResponseModel[] {
  const { sag } = plantWith(profile, prior);
  const weighs = profile.kind === 'lift';
  const tried = DEAD_TICKS.flatMap((ticks) => {
    const delay = ticks * profile.controller.period;
    const rows = drives.flatMap((drive) =>
      equationRows(drive, profile, delay + (profile.sensor?.delay ?? 0), rowShift, sag),
    );
    const model = solveRows(rows, weighs, delay, prior, drives);
    return model === null ? [] : [model];
  });
  return tried.sort((a, b) => a.left - b.left).map(({ response }) => response);
}

interface EquationRow {
  /** ∫φ·v dt. */
  readonly travelled: number;
  /** v − v₀. */
  readonly speed: number;
  readonly driven: number;
  readonly forward: number;
  readonly back: number;
}

/** One equation a row of the log, over the motion so far. */
function equationRows(
  drive: Drive,
  profile: Profile,
  dead: number,
  rowShift: number,
  sag: number,
): readonly EquationRow[] {
  const { time, output, measured } = drive;
  const speedLoop = profile.quantity === 'speed';
  const last = time.length - 1;
  const speeds = measured.map((value, row) => (speedLoop ? value : slope(time, measured, row)));
  const least = speedLoop ? 0 : restingSpeed(profile, time);
  const sums = { travelled: 0, driven: 0, forward: 0, back: 0 };
  const rows: EquationRow[] = [];
  const started = speeds[0] ?? 0;
  for (let row = 1; row <= last; row++) {
    const dt = (time[row] ?? 0) - (time[row - 1] ?? 0);
    const v = 0.5 * ((speeds[row] ?? 0) + (speeds[row - 1] ?? 0));
    const moving = Math.abs(v) > least;
    if (moving) {
      const u = meanOutput(time, output, (time[row - 1] ?? 0) - dead, (time[row] ?? 0) - dead, rowShift);
      const share = sag > 0 && !drive.supplied ? 1 / (1 + sag * u * u) : 1;
      sums.travelled += share * (speedLoop ? v * dt : (measured[row] ?? 0) - (measured[row - 1] ?? 0));
      sums.driven += share * u * dt;
      if (v > 0) sums.forward += dt;
      else sums.back += dt;
      rows.push({ ...sums, speed: (speeds[row] ?? 0) - started });
    }
  }
  return rows;
}

/** Slope of the course through a row and its neighbours. */
function slope(time: Float64Array, measured: Float64Array, row: number): number {
  const a = Math.max(0, row - 1);
  const b = Math.min(time.length - 1, row + 1);
  const dt = (time[b] ?? 0) - (time[a] ?? 0);
  return dt > 0 ? ((measured[b] ?? 0) - (measured[a] ?? 0)) / dt : 0;
}

/** Under this it rests, as far as the sensor can tell. */
function restingSpeed(profile: Profile, time: Float64Array): number {
  const dt = ((time.at(-1) ?? 1) - (time[0] ?? 0)) / Math.max(1, time.length - 1);
  return Math.max((0.6 * (profile.sensor?.resolution ?? 0)) / dt, (3 * (profile.sensor?.noise ?? 0)) / dt, 1e-9);
}

/** Mean of the held output over a stretch of time; nothing was sent before the first row. */
function meanOutput(time: Float64Array, output: Float64Array, start: number, end: number, rowShift: number): number {
  let sum = 0;
  let row = rowBefore(time, start);
  for (let at = start; at < end - 1e-12; row++) {
    const until = Math.min(end, row + 1 < time.length ? (time[row + 1] ?? end) : end);
    const held = row < 0 ? 0 : (output[Math.min(output.length - 1, row + rowShift)] ?? 0);
    sum += held * Math.max(0, until - at);
    at = Math.max(until, at + 1e-12);
    if (until >= end) break;
  }
  return sum / Math.max(1e-12, end - start);
}

function rowBefore(time: Float64Array, at: number): number {
  let low = -1;
  let high = time.length - 1;
  while (low < high) {
    const middle = Math.ceil((low + high) / 2);
    if ((time[middle] ?? 0) <= at + 1e-12) low = middle;
    else high = middle - 1;
  }
  return low;
}

/** Least squares for τ, K, K·c each way and K·h where it carries a weight. */
function solveRows(
  rows: readonly EquationRow[],
  weighs: boolean,
  delay: number,
  prior: ResponseModel,
  drives: readonly Drive[],
): { readonly response: ResponseModel; readonly left: number } | null {
  if (rows.length < 8) return null;
  const both = rows.some((row) => row.forward > 0) && rows.some((row) => row.back > 0);
  const columns = (row: EquationRow): readonly number[] => {
    const friction = row.forward - row.back;
    // One direction alone cannot tell weight from drag: then the prior's weight is taken off.
    return weighs && both
      ? [-row.speed, row.driven, -friction, -(row.forward + row.back)]
      : [-row.speed, row.driven, -friction];
  };
  const known = weighs && !both ? prior.hold : 0;
  const design = new Matrix(rows.map((row) => [...columns(row)]));
  const right = Matrix.columnVector(rows.map((row) => row.travelled));
  if (known !== 0) {
    rows.forEach((row, k) => {
      design.set(k, 1, row.driven - known * (row.forward + row.back));
    });
  }
  const solution = new SingularValueDecomposition(design, { autoTranspose: true }).solve(right);
  const [lag = 0, topSpeed = 0, braked = 0, carried = 0] = solution.to1DArray();
  if (!(lag > 0) || !(topSpeed > 0)) return null;
  const drag = Math.min(0.9, Math.max(2e-3, braked / topSpeed));
  const hold = weighs ? (both ? carried / topSpeed : known) : prior.hold;
  const breakaway = Math.max(1.05 * drag, restingOutput(drives, hold));
  const left = Matrix.sub(design.mmul(solution), right).norm('frobenius');
  return {
    response: { topSpeed, lag, drag, dragBack: drag, breakaway, breakawayBack: breakaway, hold, delay },
    left,
  };
}

/** Largest output (less the weight) under which it rested at the end of a trial: breakaway is no less. */
function restingOutput(drives: readonly Drive[], hold: number): number {
  let most = 0;
  for (const { measured, output } of drives) {
    const last = measured.length - 1;
    const still = measured[last] === measured[Math.max(0, last - 4)];
    if (still) most = Math.max(most, Math.abs((output[last] ?? 0) - hold));
  }
  return Math.min(0.9, most);
}
