import { normalNumbers } from './chance.ts';
import type { Reading } from './trial.ts';

/** Rows of a trial with even ticks: one at 0 and one at the end of each period that fits. */
function evenRows(duration: number, period: number): number {
  return Math.floor(duration / period + 1e-9) + 1;
}

// A late tick is followed by an early one at worst; no controller's clock runs ten times too fast.
const SHORTEST_SPACING = 0.1;

/**
 * Times of the controller's ticks from 0 to `duration`. Without jitter they are k·period; with it the spacings are drawn about the
 * period, none shorter than a tenth of it.
 */
export function tickTimes(period: number, duration: number, reading: Reading, seed: number): Float64Array {
  const rows = evenRows(duration, period);
  if (reading.jitter <= 0) return Float64Array.from({ length: rows }, (_, row) => row * period);
  const chance = normalNumbers(seed, Math.ceil(rows / SHORTEST_SPACING) + 1);
  const times = [0];
  for (let time = 0, row = 0; ; row++) {
    time += period * Math.max(SHORTEST_SPACING, 1 + reading.jitter * (chance[row] ?? 0));
    if (time > duration + 1e-9 * period) return Float64Array.from(times);
    times.push(time);
  }
}
