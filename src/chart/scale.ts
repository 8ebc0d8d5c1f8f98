import { tickLabel, tickStep, ticks } from './axis.ts';
import type { ChartSpec, Line } from './spec.ts';

/** The vertical scale of a plot. */
export interface Scale {
  readonly low: number;
  readonly high: number;
  readonly step: number;
  readonly rows: number;
}

/** Time from the first sample of any line to the last. */
export function wholeSpan(lines: readonly Line[]): readonly [number, number] {
  let start = Number.POSITIVE_INFINITY;
  let end = Number.NEGATIVE_INFINITY;
  for (const { time } of lines) {
    if (time.length === 0) continue;
    start = Math.min(start, time[0] ?? 0);
    end = Math.max(end, time.at(-1) ?? 0);
  }
  if (end > start) return [start, end];
  return Number.isFinite(start) ? [start, start + 1] : [0, 1];
}

/** A scale that holds every finite value shown, with a little room; a constant gets a range around it. */
export function scaleOf(spec: ChartSpec, span: readonly [number, number], rows: number): Scale {
  const [low, high] = spec.range ?? valueRange(spec.lines, span);
  if (!Number.isFinite(low) || !Number.isFinite(high)) return { low: 0, high: 1, step: 0.5, rows };
  if (high - low <= 1e-12 * Math.max(Math.abs(low), Math.abs(high), 1e-300)) {
    const around = Math.abs(low) > 0 ? 0.1 * Math.abs(low) : 1;
    return { low: low - around, high: low + around, step: tickStep(2 * around, Math.max(3, rows / 3)), rows };
  }
  const room = spec.range === null ? 0.03 * (high - low) : 0;
  return { low: low - room, high: high + room, step: tickStep(high - low, Math.max(3, rows / 3)), rows };
}

function valueRange(lines: readonly Line[], [start, end]: readonly [number, number]): readonly [number, number] {
  let low = Number.POSITIVE_INFINITY;
  let high = Number.NEGATIVE_INFINITY;
  for (const { time, value } of lines) {
    for (let row = 0; row < value.length; row++) {
      const now = value[row] ?? Number.NaN;
      const at = time[row] ?? 0;
      if (!Number.isFinite(now) || at < start || at > end) continue;
      low = Math.min(low, now);
      high = Math.max(high, now);
    }
  }
  return [low, high];
}

/** The row that a value falls in, 0 at the top; values beyond the scale lie on its edge. */
export function rowOf(value: number, { low, high, rows }: Scale): number {
  const share = (value - low) / (high - low);
  return rows - 1 - Math.round(Math.min(1, Math.max(0, share)) * (rows - 1));
}

/** A label on the row nearest to each round value; the others are blank. */
export function axisLabels(scale: Scale): readonly string[] {
  const labels = new Array<string>(scale.rows).fill('');
  for (const value of ticks(scale.low, scale.high, scale.step)) {
    labels[rowOf(value, scale)] = tickLabel(value, scale.step);
  }
  return labels;
}
