import { columnOf, timeAxis } from './axis.ts';
import { clip, legendRows, readOut } from './legend.ts';
import { plotRows } from './plot.ts';
import { axisLabels, scaleOf, wholeSpan } from './scale.ts';
import type { ChartSpec, Style } from './spec.ts';

/** Least width and height that can hold axes and a curve. */
export const LEAST_WIDTH = 30;
export const LEAST_HEIGHT = 8;

/** Least rows that a curve is given; the legend is cut before the plot is. */
const LEAST_PLOT = 3;

/**
 * Draws a chart: title, value axis with unit, curves, time axis, legend; with a cursor, what it reads.
 *
 * @returns rows of at most `spec.width` columns, at most `spec.height` of them; a spec smaller than the least is drawn at the least
 */
export function drawChart(spec: ChartSpec, style: Style): readonly string[] {
  return stack([spec], style);
}

/**
 * Two charts over one another that share the time axis, the lower one's: a column is the same moment in both. Title, legend and
 * read-out are each one's own; the cursor and the span are the upper one's.
 *
 * @returns at most upper.height + lower.height rows of at most the upper one's width
 */
export function stackCharts(upper: ChartSpec, lower: ChartSpec, style: Style): readonly string[] {
  const shared = {
    width: upper.width,
    span: upper.span ?? wholeSpan([...upper.lines, ...lower.lines]),
    cursor: upper.cursor,
  };
  return stack(
    [
      { ...upper, ...shared },
      { ...lower, ...shared },
    ],
    style,
  );
}

function stack(specs: readonly ChartSpec[], style: Style): readonly string[] {
  const laidOut = specs.map((spec, k) =>
    layOut(spec, k === specs.length - 1 ? 'with the time axis' : 'without', style),
  );
  const gutter = Math.max(...laidOut.map(({ labels }) => Math.max(1, ...labels.map((label) => label.length)))) + 1;
  return laidOut.flatMap((chart) => rowsOf(chart, gutter, style));
}

/** A chart whose rows are shared out, before the width of its value axis is known. */
interface LaidOut {
  readonly spec: ChartSpec;
  readonly span: readonly [number, number];
  readonly scale: ReturnType<typeof scaleOf>;
  readonly labels: readonly string[];
  readonly legend: readonly string[];
  readonly hasAxis: boolean;
}

function layOut(asked: ChartSpec, axis: 'with the time axis' | 'without', style: Style): LaidOut {
  const spec = { ...asked, width: Math.max(LEAST_WIDTH, asked.width), height: Math.max(LEAST_HEIGHT, asked.height) };
  const span = spec.span ?? wholeSpan(spec.lines);
  const hasAxis = axis === 'with the time axis';
  const around = 1 + (hasAxis ? 2 : 0) + (spec.cursor == null ? 0 : 1);
  const legend = legendRows(spec.lines, spec.width, spec.height - around - LEAST_PLOT, style);
  const scale = scaleOf(spec, span, spec.height - around - legend.length);
  return { spec, span, scale, labels: axisLabels(scale), legend, hasAxis };
}

function rowsOf({ spec, span, scale, labels, legend, hasAxis }: LaidOut, gutter: number, style: Style): string[] {
  const columns = spec.width - gutter - 2;
  const cursor = spec.cursor == null ? null : columnOf(spec.cursor, span, columns);
  const plot = plotRows(spec.lines, span, scale, columns, cursor, style);
  const edge = style.unicode ? '┤' : '|';
  const axis = hasAxis ? timeAxis(span[0], span[1], columns, gutter, style.unicode) : [];
  return [
    clip(`${spec.title} [${spec.unit}]`, spec.width, style),
    ...plot.map((cells, row) => `${(labels[row] ?? '').padStart(gutter)}${edge}${cells}`),
    ...axis.map((row) => row.trimEnd()),
    ...(spec.cursor == null ? [] : [readOut(spec, scale.step, style)]),
    ...legend,
  ];
}
