/** Round steps for an axis: 1, 2 or 5 times a power of ten, about `count` of them over the range. */
export function tickStep(range: number, count: number): number {
  if (!(range > 0) || !Number.isFinite(range)) return 1;
  const rough = range / Math.max(1, count);
  const power = 10 ** Math.floor(Math.log10(rough));
  const share = rough / power;
  return power * (share < 1.5 ? 1 : share < 3.5 ? 2 : share < 7.5 ? 5 : 10);
}

/** A tick's label: as many decimals as its step needs. */
export function tickLabel(value: number, step: number): string {
  const decimals = Math.max(0, Math.min(9, -Math.floor(Math.log10(step) + 1e-9)));
  const text = value.toFixed(decimals);
  return Number(text) === 0 ? (0).toFixed(decimals) : text;
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
  const at = (time: number) => Math.round(((time - start) / (end - start || 1)) * (columns - 1));
  let free = 0;
  for (let k = Math.ceil(start / step - 1e-9); k * step <= end + 1e-9 * step; k++) {
    const column = at(k * step);
    if (column < 0 || column >= columns) continue;
    rule[column] = unicode ? '┴' : '+';
    const text = tickLabel(k * step, step);
    const left = Math.max(0, Math.min(columns - text.length - 1, column - Math.floor(text.length / 2)));
    if (left < free || left + text.length > columns - 1) continue;
    for (let c = 0; c < text.length; c++) labels[left + c] = text[c] ?? ' ';
    free = left + text.length + 1;
  }
  labels[columns] = 's';
  const pad = ' '.repeat(corner);
  return [`${pad}${unicode ? '└' : '+'}${rule.join('')}`, `${pad} ${labels.join('')}`];
}
