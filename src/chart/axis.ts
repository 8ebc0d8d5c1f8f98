/** Most ticks that an axis is ever given: a guard where steps are lost in the rounding of huge numbers. */
const MOST_TICKS = 200;

/** Round steps for an axis: 1, 2 or 5 times a power of ten, about `count` of them over the range. */
export function tickStep(range: number, count: number): number {
  if (!(range > 0) || !Number.isFinite(range)) return 1;
  const rough = range / Math.max(1, count);
  const power = 10 ** Math.floor(Math.log10(rough));
  const share = rough / power;
  return power * (share < 1.5 ? 1 : share < 3.5 ? 2 : share < 7.5 ? 5 : 10);
}

/** The round values from low to high. */
export function ticks(low: number, high: number, step: number): readonly number[] {
  const found: number[] = [];
  const first = Math.ceil(low / step - 1e-9);
  for (let k = 0; k < MOST_TICKS; k++) {
    const value = (first + k) * step;
    if (value > high + 1e-9 * step) break;
    if (value !== found.at(-1)) found.push(value);
  }
  return found;
}

/** A tick's label: as many decimals as its step needs; powers of ten where that would be a long row of digits. */
export function tickLabel(value: number, step: number): string {
  const finest = Math.floor(Math.log10(step) + 1e-9);
  if (Math.abs(value) >= 1e6 || finest < -5) {
    if (Math.abs(value) < step / 2) return '0';
    const digits = Math.floor(Math.log10(Math.abs(value)) + 1e-9) - finest;
    return value
      .toExponential(Math.max(0, Math.min(8, digits)))
      .replace('e+', 'e')
      .replace(/\.?0*e/, 'e');
  }
  const text = value.toFixed(Math.max(0, Math.min(9, -finest)));
  return Number(text) === 0 ? text.replace('-', '') : text;
}

/** The time axis under a plot: a ruled line with ticks, and a line of labels ending in "s". */
export function timeAxis(
  start: number,
  end: number,
  columns: number,
  corner: number,
  unicode: boolean,
): readonly [string, string] {
  const step = tickStep(end - start, Math.max(2, Math.floor(columns / 12)));
  const rule = new Array<string>(columns).fill(unicode ? '─' : '-');
  const labels = new Array<string>(columns + 1).fill(' ');
  let free = 0;
  for (const value of ticks(start, end, step)) {
    const column = columnOf(value, [start, end], columns);
    if (column < 0 || column >= columns) continue;
    rule[column] = unicode ? '┴' : '+';
    const text = tickLabel(value, step);
    const left = Math.max(0, Math.min(columns - text.length - 1, column - Math.floor(text.length / 2)));
    if (left < free || left + text.length > columns - 1) continue;
    for (let c = 0; c < text.length; c++) labels[left + c] = text[c] ?? ' ';
    free = left + text.length + 1;
  }
  labels[columns] = 's';
  const pad = ' '.repeat(corner);
  return [`${pad}${unicode ? '└' : '+'}${rule.join('')}`, `${pad} ${labels.join('')}`];
}

/** The column that a time falls in; may lie outside of 0 … columns − 1. */
export function columnOf(time: number, [start, end]: readonly [number, number], columns: number): number {
  return Math.round(((time - start) / (end - start || 1)) * (columns - 1));
}
