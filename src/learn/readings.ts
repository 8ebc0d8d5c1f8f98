/**
 * A column with its gaps filled by the reading before (those at the start by the first there is), and how many there were.
 *
 * @returns null when no value is finite
 */
export function filled(column: Float64Array): { readonly values: Float64Array; readonly missing: number } | null {
  const first = column.find(Number.isFinite);
  if (first === undefined) return null;
  let last = first;
  let missing = 0;
  const values = column.map((value) => {
    if (Number.isFinite(value)) last = value;
    else missing++;
    return last;
  });
  return { values, missing };
}

/** Readings of a wrapping sensor as one continuous course. */
export function unwrapped(measured: Float64Array, width: number | null): Float64Array {
  if (width === null) return measured;
  const course = Float64Array.from(measured);
  let turns = 0;
  for (let row = 1; row < course.length; row++) {
    const jump = (measured[row] ?? 0) - (measured[row - 1] ?? 0);
    turns -= Math.round(jump / width);
    course[row] = (measured[row] ?? 0) + turns * width;
  }
  return course;
}

/** The smallest change between neighbours: one step of the sensor, where it has steps; 0 when nothing changes. */
export function smallestStep(measured: Float64Array): number {
  let least = Number.POSITIVE_INFINITY;
  for (let row = 1; row < measured.length; row++) {
    const change = Math.abs((measured[row] ?? 0) - (measured[row - 1] ?? 0));
    if (change > 0 && change < least) least = change;
  }
  return Number.isFinite(least) ? least : 0;
}

/** A run of equal readings counts as so many. */
const RUN_COUNTS = 3;

/**
 * What each reading is worth to a fit, 0 to 1. A run of equal readings, as of a mechanism at rest, tells one value however long
 * it lasts: its rows share the worth of three. A reading that is not a number, or that jumps away for one row and straight
 * back, tells nothing.
 *
 * @param read as logged
 * @param measured filled and unwrapped
 * @param least a jump no larger than this is none, unit of `measured`
 */
export function informationOf(read: Float64Array, measured: Float64Array, least: number): Float64Array {
  const worth = new Float64Array(measured.length);
  for (let start = 0; start < measured.length; ) {
    let end = start + 1;
    while (end < measured.length && measured[end] === measured[start]) end++;
    worth.fill(Math.min(1, RUN_COUNTS / (end - start)), start, end);
    start = end;
  }
  for (let row = 0; row < worth.length; row++) {
    if (!Number.isFinite(read[row]) || isGlitch(measured, row, least)) worth[row] = 0;
  }
  return worth;
}

/** A jump away and straight back, many times what the readings around it change by: a swing's peak is none. */
function isGlitch(measured: Float64Array, row: number, least: number): boolean {
  if (row === 0 || row + 1 >= measured.length) return false;
  const at = (index: number) => measured[Math.max(0, Math.min(measured.length - 1, index))] ?? 0;
  const out = at(row) - at(row - 1);
  const back = at(row) - at(row + 1);
  const around = Math.abs(at(row - 1) - at(row - 2)) + Math.abs(at(row + 2) - at(row + 1)) + Math.abs(out - back);
  return out * back > 0 && Math.min(Math.abs(out), Math.abs(back)) > 6 * Math.max(around, least);
}
