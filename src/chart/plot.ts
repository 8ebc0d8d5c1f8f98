import asciichart from 'asciichart';
import { coloured, glyphOf, LAYERS, LOOKS } from './looks.ts';
import { type Columns, resample } from './resample.ts';
import { rowOf, type Scale } from './scale.ts';
import type { Line, Style } from './spec.ts';

interface Cell {
  glyph: string;
  colour: string;
}

/** The sheet that lines are laid on, one over the other. */
interface Sheet {
  readonly cells: readonly (readonly Cell[])[];
  readonly scale: Scale;
  readonly span: readonly [number, number];
  readonly columns: number;
  readonly style: Style;
}

/**
 * Lines over one another, the curve on top; a cursor stands in the column it is given, where nothing else is drawn.
 *
 * @returns one text a row of the scale, of at most `columns` columns
 */
export function plotRows(
  lines: readonly Line[],
  span: readonly [number, number],
  scale: Scale,
  columns: number,
  cursor: number | null,
  style: Style,
): readonly string[] {
  const blank = () => Array.from({ length: columns }, (): Cell => ({ glyph: ' ', colour: '' }));
  const sheet: Sheet = { cells: Array.from({ length: scale.rows }, blank), scale, span, columns, style };
  if (cursor !== null)
    for (let row = 0; row < scale.rows; row++) put(sheet, row, cursor, style.unicode ? '┊' : '|', '');
  for (const role of LAYERS) {
    const own = lines.filter((line) => line.role === role);
    if (role === 'band') shadeBands(sheet, own);
    else for (const line of own) drawLine(sheet, line);
  }
  return sheet.cells.map((cells) => paint(cells, style));
}

const resampled = ({ span, columns }: Sheet, { time, value }: Line): Columns => resample(time, value, span, columns);

/** Shades from each low line to the high line that follows it; a line without a partner is drawn alone. */
function shadeBands(sheet: Sheet, lines: readonly Line[]): void {
  const glyph = glyphOf('band', sheet.style);
  for (let k = 0; k < lines.length; k += 2) {
    const [one, other] = [lines[k], lines[k + 1] ?? lines[k]];
    if (one === undefined || other === undefined) continue;
    const below = resampled(sheet, one).low;
    const above = resampled(sheet, other).high;
    below.forEach((low, column) => {
      const high = above[column] ?? Number.NaN;
      if (Number.isNaN(low) || Number.isNaN(high)) return;
      const [first, last] = [rowOf(low, sheet.scale), rowOf(high, sheet.scale)].sort((a, b) => a - b);
      for (let row = first ?? 0; row <= (last ?? -1); row++) put(sheet, row, column, glyph, LOOKS.band.colour);
    });
  }
}

function drawLine(sheet: Sheet, line: Line): void {
  const drawn = resampled(sheet, line);
  const { colour, shape } = LOOKS[line.role];
  const glyph = glyphOf(line.role, sheet.style);
  for (const [first, end] of unbroken(drawn.value)) {
    if (shape === 'curve' && end - first > 1) {
      drawCurve(sheet, drawn, first, end, colour, glyph);
      continue;
    }
    for (let column = first; column < end; column++) {
      put(sheet, rowOf(drawn.value[column] ?? 0, sheet.scale), column, glyph, colour);
    }
  }
}

/** Stretches without a gap: first column, and the one after the last. */
function unbroken(values: readonly number[]): readonly (readonly [first: number, end: number])[] {
  const parts: (readonly [number, number])[] = [];
  let first = -1;
  for (let column = 0; column <= values.length; column++) {
    const there = column < values.length && !Number.isNaN(values[column]);
    if (there && first < 0) first = column;
    if (!there && first >= 0) {
      parts.push([first, column]);
      first = -1;
    }
  }
  return parts;
}

/**
 * asciichart draws one curve, row numbers in and row numbers out so that no rounding moves it; its own axis is cut off. A
 * column in which the line went farther than its neighbours show gets an upright from its least to its most.
 */
function drawCurve(sheet: Sheet, drawn: Columns, first: number, end: number, colour: string, level: string): void {
  const { scale, style } = sheet;
  const bottom = scale.rows - 1;
  const heights = drawn.value.slice(first, end).map((value) => bottom - rowOf(value, scale));
  // One more sample: asciichart draws from each sample to the next.
  const text = asciichart.plot([...heights, heights.at(-1) ?? 0], {
    height: bottom,
    min: 0,
    max: bottom,
    offset: 1,
    padding: ' ',
    format: () => ' ',
    symbols: symbolsOf(style.unicode, level),
  });
  const upright = style.unicode ? '│' : '|';
  for (let column = first; column < end; column++) {
    const near = [column - 1, column, column + 1].filter((k) => k >= first && k < end);
    const drawnAt = near.map((k) => rowOf(drawn.value[k] ?? 0, scale));
    const top = rowOf(drawn.high[column] ?? 0, scale);
    const low = rowOf(drawn.low[column] ?? 0, scale);
    if (top >= Math.min(...drawnAt) && low <= Math.max(...drawnAt)) continue;
    for (let row = top; row <= low; row++) put(sheet, row, column, upright, colour);
  }
  text.split('\n').forEach((line, row) => {
    // The first column is asciichart's own axis.
    [...line].slice(1).forEach((glyph, k) => {
      if (glyph !== ' ' && first + k < end) put(sheet, row, first + k, glyph, colour);
    });
  });
}

type Symbols = [string, string, string, string, string, string, string, string, string, string];

/** asciichart's ten glyphs: gap, axis, ends, level, the four bends, upright. */
function symbolsOf(unicode: boolean, level: string): Symbols {
  return unicode
    ? ['┼', '┤', '╶', '╴', '─', '╰', '╭', '╮', '╯', '│']
    : ['+', '|', level, level, level, '\\', '/', '\\', '/', '|'];
}

function put(sheet: Sheet, row: number, column: number, glyph: string, colour: string): void {
  const cell = sheet.cells[row]?.[column];
  if (!cell) return;
  cell.glyph = glyph;
  cell.colour = colour;
}

/** A row as text: runs of one colour are wrapped together, blanks at the end are left out. */
function paint(cells: readonly Cell[], style: Style): string {
  const last = cells.findLastIndex(({ glyph }) => glyph !== ' ');
  let text = '';
  let run = '';
  let colour = '';
  for (const cell of cells.slice(0, last + 1)) {
    const wanted = cell.glyph === ' ' ? colour : cell.colour;
    if (wanted !== colour) {
      text += coloured(run, colour, style);
      run = '';
      colour = wanted;
    }
    run += cell.glyph;
  }
  return text + coloured(run, colour, style);
}
