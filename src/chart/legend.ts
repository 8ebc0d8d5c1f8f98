import { textWidth } from '../record/text-width.ts';
import { coloured, glyphOf, LAYERS, LOOKS } from './looks.ts';
import { valueAt } from './resample.ts';
import type { ChartSpec, Line, Style } from './spec.ts';

/** One entry a name, with the glyph it is drawn in; wrapped to the width, `mostRows` rows at most. */
export function legendRows(lines: readonly Line[], width: number, mostRows: number, style: Style): readonly string[] {
  const seen = new Map<string, Line['role']>();
  for (const line of lines) if (line.name !== '' && !seen.has(line.name)) seen.set(line.name, line.role);
  const rows: string[] = [];
  let row = '';
  let used = 0;
  for (const [name, role] of seen) {
    const glyphs = glyphOf(role, style).repeat(2);
    const said = clip(name, width - 5, style);
    const gap = used > 0 ? '   ' : '  ';
    const size = textWidth(said) + 3 + gap.length;
    if (used > 0 && used + size > width) {
      rows.push(row);
      row = '';
      used = 0;
    }
    row += `${used > 0 ? gap : '  '}${coloured(glyphs, LOOKS[role].colour, style)} ${said}`;
    used += used > 0 ? size : textWidth(said) + 5;
  }
  if (used > 0) rows.push(row);
  return rows.slice(0, mostRows);
}

/** What every line reads at the cursor: `at 0.42 s   setpoint 1.000   measured 0.874 m`; bands as "low to high". */
export function readOut(spec: ChartSpec, step: number, style: Style): string {
  const at = spec.cursor ?? 0;
  const said = new Map<string, number[]>();
  // What lies on top is read first: measured before what it was promised.
  const lines = [...spec.lines].sort((a, b) => LAYERS.indexOf(b.role) - LAYERS.indexOf(a.role));
  for (const { name, role, time, value } of lines) {
    if (name === '' || role === 'tolerance') continue;
    const now = valueAt(time, value, at);
    const short = name.split(',')[0] ?? name;
    if (Number.isFinite(now)) said.set(short, [...(said.get(short) ?? []), now]);
  }
  // Two digits finer than the axis: what a pixel would show.
  const decimals = Math.max(0, Math.min(9, 2 - Math.floor(Math.log10(step) + 1e-9)));
  const amount = (value: number) => (Math.abs(value) >= 1e6 ? value.toExponential(4) : value.toFixed(decimals));
  const parts = [...said].map(([name, values]) => `${name} ${values.map(amount).join(' to ')}`);
  const unit = parts.length > 0 && spec.unit !== '' ? ` ${spec.unit}` : '';
  return clip(`  at ${Number(at.toFixed(4))} s   ${parts.join('   ')}${unit}`, spec.width, style);
}

/** A text of at most `width` columns, cut with a mark where it is longer; wide characters count as two. */
export function clip(text: string, width: number, style: Style): string {
  if (textWidth(text) <= width) return text;
  const mark = style.unicode ? '…' : '..';
  let cut = '';
  let used = textWidth(mark);
  for (const character of text) {
    used += textWidth(character);
    if (used > width) break;
    cut += character;
  }
  return cut + mark;
}
