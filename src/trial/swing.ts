/** A turning point of a response about its final value. */
export interface Turn {
  readonly time: number;
  /** Distance from the final value, signed. */
  readonly height: number;
  readonly row: number;
}

export interface Swing {
  readonly turns: readonly Turn[];
  /** Next ÷ previous same-side extreme, the middle one of all pairs; null with fewer than two on a side. */
  readonly ratio: number | null;
  /** Mean time between same-side extremes, s. */
  readonly period: number | null;
}

/**
 * Swings of a response about a level: its extremes between crossings that rise above `least` from it.
 *
 * @param level the value swung about, same unit as `value`
 * @param least smallest height that counts: above the sensor's resolution and noise
 */
export function swingOf(time: Float64Array, value: Float64Array, level: number, least: number): Swing {
  const turns: Turn[] = [];
  let side = 0;
  let best: Turn | null = null;
  for (let row = 0; row < time.length; row++) {
    const height = (value[row] ?? 0) - level;
    const now = Math.abs(height) < least ? 0 : Math.sign(height);
    if (now !== 0 && now !== side) {
      if (best !== null) turns.push(best);
      best = null;
      side = now;
    }
    if (side !== 0 && now === side && (best === null || Math.abs(height) > Math.abs(best.height))) {
      best = { time: time[row] ?? 0, height, row };
    }
  }
  // The last stretch counts only once it has turned back: an extreme in the last row may still be growing.
  if (best !== null && best.row < time.length - 1) turns.push(best);
  // The first is the start of the move itself, not a swing.
  return summarise(turns.slice(1));
}

function summarise(turns: readonly Turn[]): Swing {
  const ratios: number[] = [];
  const periods: number[] = [];
  for (let k = 2; k < turns.length; k++) {
    const previous = turns[k - 2];
    const next = turns[k];
    if (!previous || !next || previous.height === 0) continue;
    ratios.push(Math.abs(next.height / previous.height));
    periods.push(next.time - previous.time);
  }
  ratios.sort((a, b) => a - b);
  const ratio = ratios.length === 0 ? null : (ratios[Math.floor(ratios.length / 2)] ?? null);
  const period = periods.length === 0 ? null : periods.reduce((total, time) => total + time, 0) / periods.length;
  return { turns, ratio, period };
}
