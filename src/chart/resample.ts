/** What a line does within one column of the drawing. */
export interface Column {
  /** Value drawn; NaN = nothing there. */
  readonly value: number;
}

/**
 * A line resampled to `columns` values over a span of time, keeping its extremes: each column shows the value in it that lies
 * farthest from where the column began, so that a spike of one sample is never lost. Between samples it is interpolated.
 */
export function resample(
  time: Float64Array,
  value: Float64Array,
  span: readonly [number, number],
  columns: number,
): number[] {
  const [start, end] = span;
  const width = (end - start) / Math.max(1, columns - 1);
  const drawn: number[] = [];
  let row = 0;
  for (let column = 0; column < columns; column++) {
    const centre = start + column * width;
    const left = centre - width / 2;
    const right = centre + width / 2;
    while (row < time.length && (time[row] ?? 0) < left) row++;
    const here = interpolate(time, value, row, centre);
    let picked = here;
    for (let at = row; at < time.length && (time[at] ?? 0) < right; at++) {
      const candidate = value[at] ?? Number.NaN;
      if (Number.isNaN(picked) || Math.abs(candidate - here) > Math.abs(picked - here)) picked = candidate;
    }
    drawn.push(picked);
  }
  return drawn;
}

function interpolate(time: Float64Array, value: Float64Array, row: number, at: number): number {
  let next = row;
  while (next < time.length && (time[next] ?? 0) < at) next++;
  if (next >= time.length || time.length === 0)
    return (time.at(-1) ?? Number.NaN) >= at - 1e-9 ? (value.at(-1) ?? Number.NaN) : Number.NaN;
  if (next === 0) return (time[0] ?? 0) - at <= 1e-9 ? (value[0] ?? Number.NaN) : Number.NaN;
  const t0 = time[next - 1] ?? 0;
  const t1 = time[next] ?? t0;
  const share = t1 > t0 ? (at - t0) / (t1 - t0) : 0;
  const a = value[next - 1] ?? Number.NaN;
  return a + share * ((value[next] ?? Number.NaN) - a);
}
