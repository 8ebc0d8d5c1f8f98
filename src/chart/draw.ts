import asciichart from 'asciichart';
import stringWidth from 'string-width';
import { tickLabel, tickStep, timeAxis } from './axis.ts';
import { resample } from './resample.ts';
import type { ChartSpec, Line, Style } from './spec.ts';

/** How each kind of line looks: a glyph that tells it apart without colour, in Unicode and in ASCII, and an SGR colour. */
const LOOKS: Readonly<
  Record<
    Line['role'],
    { readonly unicode: string; readonly ascii: string; readonly colour: string; readonly curve: boolean }
  >
> = {
  tolerance: { unicode: '┄', ascii: '.', colour: '90', curve: false },
  band: { unicode: '░', ascii: ':', colour: '36', curve: false },
  setpoint: { unicode: '╌', ascii: '=', colour: '33', curve: false },
  promise: { unicode: '·', ascii: "'", colour: '36', curve: false },
  measured: { unicode: '─', ascii: '*', colour: '97', curve: true },
  output: { unicode: '─', ascii: '*', colour: '97', curve: true },
  p: { unicode: 'p', ascii: 'p', colour: '33', curve: false },
  i: { unicode: 'i', ascii: 'i', colour: '35', curve: false },
  d: { unicode: 'd', ascii: 'd', colour: '36', curve: false },
  other: { unicode: '∙', ascii: 'o', colour: '34', curve: false },
};

/** Least width and height that can hold axes and a curve. */
export const LEAST_WIDTH = 30;
export const LEAST_HEIGHT = 8;

/**
 * Draws a chart: title, value axis with unit, curves, time axis, legend.
 *
 * @returns rows of at most `spec.width` columns, at most `spec.height` of them; a spec smaller than the least is drawn at the least
 */
export function drawChart(spec: ChartSpec, style: Style): readonly string[] {
  const width = Math.max(LEAST_WIDTH, spec.width);
  const height = Math.max(LEAST_HEIGHT, spec.height);
  const span = spec.span ?? wholeSpan(spec.lines);
  const legend = legendOf(spec.lines, width, style);
  const plotRows = height - 3 - legend.length;
  const [low, high, step] = verticalRange(spec, span, plotRows);
  const labels = axisLabels(low, high, plotRows, step);
  const gutter = Math.max(...labels.map((label) => label.length), 1) + 1;
  const columns = width - gutter - 2;
  const grid = plotGrid(spec.lines, span, [low, high], plotRows, columns, style);
  const rows = grid.map((cells, row) => `${(labels[row] ?? '').padStart(gutter)}${style.unicode ? '┤' : '|'}${cells}`);
  const title = clip(`${spec.title} [${spec.unit}]`, width);
  return [
    title,
    ...rows,
    ...timeAxis(span[0], span[1], columns, gutter, style.unicode).map((row) => row.trimEnd()),
    ...legend,
  ];
}

function wholeSpan(lines: readonly Line[]): readonly [number, number] {
  let start = Number.POSITIVE_INFINITY;
  let end = Number.NEGATIVE_INFINITY;
  for (const { time } of lines) {
    if (time.length === 0) continue;
    start = Math.min(start, time[0] ?? 0);
    end = Math.max(end, time.at(-1) ?? 0);
  }
  return end > start ? [start, end] : [0, 1];
}

/** Range that holds every finite value, with a little room; a constant gets a range around it. */
function verticalRange(
  spec: ChartSpec,
  span: readonly [number, number],
  rows: number,
): readonly [low: number, high: number, step: number] {
  let low = spec.range?.[0] ?? Number.POSITIVE_INFINITY;
  let high = spec.range?.[1] ?? Number.NEGATIVE_INFINITY;
  if (spec.range === null) {
    for (const { time, value } of spec.lines) {
      for (let row = 0; row < value.length; row++) {
        const now = value[row] ?? Number.NaN;
        if (!Number.isFinite(now) || (time[row] ?? 0) < span[0] || (time[row] ?? 0) > span[1]) continue;
        low = Math.min(low, now);
        high = Math.max(high, now);
      }
    }
  }
  if (!Number.isFinite(low) || !Number.isFinite(high)) return [0, 1, 0.5];
  if (high - low <= 1e-12 * Math.max(Math.abs(low), Math.abs(high), 1e-9)) {
    const around = Math.abs(low) > 0 ? 0.1 * Math.abs(low) : 1;
    return [low - around, high + around, tickStep(2 * around, rows / 3)];
  }
  const room = spec.range === null ? 0.03 * (high - low) : 0;
  return [low - room, high + room, tickStep(high - low, Math.max(2, rows / 3))];
}

/** A label on the row nearest to each round value; the others are blank. */
function axisLabels(low: number, high: number, rows: number, step: number): readonly string[] {
  const labels = new Array<string>(rows).fill('');
  for (let k = Math.ceil(low / step - 1e-9); k * step <= high + 1e-9 * step; k++) {
    const row = Math.round(((high - k * step) / (high - low)) * (rows - 1));
    if (row >= 0 && row < rows) labels[row] = tickLabel(k * step, step);
  }
  return labels;
}

interface Cell {
  glyph: string;
  colour: string;
}

/** Draws line after line, later ones on top, the curve last: asciichart shapes each, this lays them over one another. */
function plotGrid(
  lines: readonly Line[],
  span: readonly [number, number],
  range: readonly [number, number],
  rows: number,
  columns: number,
  style: Style,
): readonly string[] {
  const grid = Array.from({ length: rows }, () =>
    Array.from({ length: columns }, (): Cell => ({ glyph: ' ', colour: '' })),
  );
  const order: readonly Line['role'][] = [
    'tolerance',
    'band',
    'promise',
    'setpoint',
    'other',
    'd',
    'i',
    'p',
    'output',
    'measured',
  ];
  const sorted = [...lines].sort((a, b) => order.indexOf(a.role) - order.indexOf(b.role));
  for (const line of sorted) {
    const values = resample(line.time, line.value, span, columns).map((value) =>
      Math.min(range[1], Math.max(range[0], value)),
    );
    const look = LOOKS[line.role];
    for (const part of unbroken(values)) {
      if (look.curve) drawCurve(grid, part, range, rows, look.colour, style, look.ascii);
      else drawDots(grid, part, range, rows, style.unicode ? look.unicode : look.ascii, look.colour);
    }
  }
  return grid.map((cells) => paint(cells, style.colour));
}

interface Part {
  readonly first: number;
  readonly values: readonly number[];
}

function unbroken(values: readonly number[]): readonly Part[] {
  const parts: Part[] = [];
  let first = -1;
  for (let column = 0; column <= values.length; column++) {
    const there = column < values.length && Number.isFinite(values[column]);
    if (there && first < 0) first = column;
    if (!there && first >= 0) {
      parts.push({ first, values: values.slice(first, column) });
      first = -1;
    }
  }
  return parts;
}

function drawDots(
  grid: Cell[][],
  part: Part,
  range: readonly [number, number],
  rows: number,
  glyph: string,
  colour: string,
): void {
  part.values.forEach((value, k) => {
    const row = Math.round(((range[1] - value) / (range[1] - range[0])) * (rows - 1));
    put(grid, row, part.first + k, glyph, colour);
  });
}

/** asciichart draws one curve over exactly this range and height; its own axis is cut off. */
function drawCurve(
  grid: Cell[][],
  part: Part,
  range: readonly [number, number],
  rows: number,
  colour: string,
  style: Style,
  ascii: string,
): void {
  if (part.values.length < 2) {
    drawDots(grid, part, range, rows, style.unicode ? '─' : ascii, colour);
    return;
  }
  const symbols = symbolsOf(style.unicode, ascii);
  const text = asciichart.plot([...part.values, part.values.at(-1) ?? 0], {
    height: rows - 1,
    min: range[0],
    max: range[1],
    offset: 1,
    padding: '',
    format: () => '',
    symbols,
  });
  text
    .split('\n')
    .slice(0, rows)
    .forEach((line, row) => {
      // The first column is asciichart's own axis.
      [...line].slice(1).forEach((glyph, k) => {
        if (glyph !== ' ' && k < part.values.length) put(grid, row, part.first + k, glyph, colour);
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

function put(grid: Cell[][], row: number, column: number, glyph: string, colour: string): void {
  const cell = grid[row]?.[column];
  if (!cell) return;
  cell.glyph = glyph;
  cell.colour = colour;
}

function paint(cells: readonly Cell[], colour: boolean): string {
  if (!colour)
    return cells
      .map((cell) => cell.glyph)
      .join('')
      .trimEnd();
  let text = '';
  let now = '';
  for (const cell of cells) {
    const wanted = cell.glyph === ' ' ? now : cell.colour;
    if (wanted !== now) {
      text += `\u001b[${wanted === '' ? '0' : wanted}m`;
      now = wanted;
    }
    text += cell.glyph;
  }
  return now === '' ? text : `${text.trimEnd()}\u001b[0m`;
}

/** One entry a name, with the glyph it is drawn in; wrapped to the width. */
function legendOf(lines: readonly Line[], width: number, style: Style): readonly string[] {
  const seen = new Map<string, Line['role']>();
  for (const line of lines) if (line.name !== '' && !seen.has(line.name)) seen.set(line.name, line.role);
  const rows: string[] = [];
  let row = '';
  let used = 0;
  for (const [name, role] of seen) {
    const look = LOOKS[role];
    const glyph = style.unicode ? look.unicode : look.ascii;
    const sample = style.colour ? `\u001b[${look.colour}m${glyph}${glyph}\u001b[0m` : `${glyph}${glyph}`;
    const size = stringWidth(`${glyph}${glyph} ${name}`) + (used > 0 ? 3 : 2);
    if (used > 0 && used + size > width) {
      rows.push(row);
      row = '';
      used = 0;
    }
    row += `${used > 0 ? '   ' : '  '}${sample} ${name}`;
    used += size;
  }
  if (used > 0) rows.push(row);
  return rows;
}

function clip(text: string, width: number): string {
  return text.length > width ? `${text.slice(0, Math.max(0, width - 1))}…` : text;
}
