/** A line resampled to the columns of a drawing, one entry a column. NaN = nothing there. */
export interface Columns {
  /** What is drawn: the extreme of the column that lies farthest from its middle, so that a spike of one sample is never lost. */
  readonly value: readonly number[];
  /** Least and most within the column. */
  readonly low: readonly number[];
  readonly high: readonly number[];
}

/** A line resampled to `columns` columns over a span of time, keeping its extremes. Between samples it is interpolated. */
export function resample(
  time: Float64Array,
  value: Float64Array,
  span: readonly [number, number],
  columns: number,
): Columns {
  const [start, end] = span;
  const width = (end - start) / Math.max(1, columns - 1);
  const drawn: number[] = [];
  const lowest: number[] = [];
  const highest: number[] = [];
  let row = 0;
  for (let column = 0; column < columns; column++) {
    const centre = start + column * width;
    while (row < time.length && (time[row] ?? 0) < centre - width / 2) row++;
    const here = valueAt(time, value, centre, row);
    let picked = here;
    let low = here;
    let high = here;
    for (let at = row; at < time.length && (time[at] ?? 0) < centre + width / 2; at++) {
      const candidate = value[at] ?? Number.NaN;
      if (Number.isNaN(candidate)) continue;
      if (Number.isNaN(picked) || Math.abs(candidate - here) > Math.abs(picked - here)) picked = candidate;
      if (!(low <= candidate)) low = candidate;
      if (!(high >= candidate)) high = candidate;
    }
    drawn.push(picked);
    lowest.push(low);
    highest.push(high);
  }
  return { value: drawn, low: lowest, high: highest };
}

/**
 * A line's value at a time, interpolated between its samples.
 *
 * @param from a row before which the time is not looked for
 * @returns NaN before the first sample, after the last and beside a gap
 */
export function valueAt(time: Float64Array, value: Float64Array, at: number, from = 0): number {
  const slack = 1e-9 * Math.max(1, Math.abs(at));
  let next = from;
  while (next < time.length && (time[next] ?? 0) < at) next++;
  if (next >= time.length) return (time.at(-1) ?? Number.NaN) >= at - slack ? (value.at(-1) ?? Number.NaN) : Number.NaN;
  if (next === 0) return (time[0] ?? 0) - at <= slack ? (value[0] ?? Number.NaN) : Number.NaN;
  const t0 = time[next - 1] ?? 0;
  const t1 = time[next] ?? t0;
  const after = value[next] ?? Number.NaN;
  if (t1 === at || t1 <= t0) return after;
  const before = value[next - 1] ?? Number.NaN;
  return before + ((at - t0) / (t1 - t0)) * (after - before);
}
