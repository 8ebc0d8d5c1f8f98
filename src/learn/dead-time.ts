import type { Interval } from '../record/band.ts';
import type { Samples } from '../record/samples.ts';

/** Share of a move that counts as having begun. */
const BEGUN = 0.05;

/** Rows before a step of the setpoint that must be still for its answer to be told apart from motion. */
const STILL_ROWS = 3;

/**
 * Dead time from the setpoint to the reading, s, where a log has neither output nor gains: the moves that begin from a still reading
 * are looked at, and each tells a row that was still at rest and the next, in which motion is seen.
 *
 * @param least change of a reading that noise does not explain, unit of the readings
 * @returns best: when motion is first seen; low: when none was seen yet (both the median move's); high: the latest move's; null when no
 *   move begins from rest
 */
export function deadTimeOf({ time, setpoint, measured }: Samples, least: number): Interval | null {
  const still: number[] = [];
  const seen: number[] = [];
  for (let step = 0; step < time.length; step++) {
    const isStep = step === 0 ? setpoint[0] !== measured[0] : setpoint[step] !== setpoint[step - 1];
    if (!isStep || !isStillBefore(measured, step, least)) continue;
    const onset = onsetAfter(setpoint, measured, step, least);
    if (onset === null) continue;
    still.push((time[onset - 1] ?? 0) - (time[step] ?? 0));
    seen.push((time[onset] ?? 0) - (time[step] ?? 0));
  }
  if (seen.length === 0) return null;
  return { best: middleOf(seen), low: Math.min(middleOf(still), middleOf(seen)), high: Math.max(...seen) };
}

function isStillBefore(measured: Float64Array, step: number, least: number): boolean {
  const here = measured[step] ?? 0;
  for (let row = Math.max(0, step - STILL_ROWS); row < step; row++) {
    if (Math.abs((measured[row] ?? 0) - here) > least) return false;
  }
  return true;
}

/** First row that has left the reading at the step for good: by noise and more, and by a share of the farthest it goes. */
function onsetAfter(setpoint: Float64Array, measured: Float64Array, step: number, least: number): number | null {
  const from = measured[step] ?? 0;
  let end = step + 1;
  let farthest = 0;
  while (end < measured.length && setpoint[end] === setpoint[step]) {
    farthest = Math.max(farthest, Math.abs((measured[end] ?? 0) - from));
    end++;
  }
  const enough = Math.max(least, BEGUN * farthest);
  for (let row = step + 1; row < end; row++) if (Math.abs((measured[row] ?? 0) - from) > enough) return row;
  return null;
}

function middleOf(values: readonly number[]): number {
  const sorted = [...values].sort((a, b) => a - b);
  return sorted[Math.floor(sorted.length / 2)] ?? 0;
}
