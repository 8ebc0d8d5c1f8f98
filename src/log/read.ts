import type { OutputUnit } from '../controller/settings.ts';
import type { Unit } from '../mechanism/profile.ts';
import type { Samples } from '../record/samples.ts';
import { type Column, type Columns, columnsOf } from './columns.ts';
import { LogError } from './error.ts';
import { type Gathered, gatherer } from './gather.ts';
import type { Role } from './headers.ts';
import { type Layout, layoutOf } from './layout.ts';
import { eachLine, eachRow } from './rows.ts';
import { bytesText, fileText, type TextSource } from './source.ts';
import { type LoggedMove, splitMoves } from './split.ts';

/** How to read a log; all of it may be left as it is. */
export interface ReadOptions {
  /** Header or 1-based number, by role. */
  readonly columns: Readonly<Partial<Record<Role, string>>>;
  /** The profile's unit; null = keep the log's. */
  readonly unit: Unit | null;
  /** True unit of the log's readings, where its header is silent or wrong. */
  readonly logUnit: Unit | null;
  readonly outputUnit: OutputUnit | null;
  readonly logOutputUnit: OutputUnit | null;
  readonly quantity: 'position' | 'speed' | null;
  readonly rows: 'as-they-are' | 'repaired';
  /** Whether a log without a setpoint is of use (for a fit) or not (for figures). */
  readonly setpoint: 'needed' | 'optional';
}

export const PLAIN_READ: ReadOptions = {
  columns: {},
  unit: null,
  logUnit: null,
  outputUnit: null,
  logOutputUnit: null,
  quantity: null,
  rows: 'as-they-are',
  setpoint: 'needed',
};

/** A log as read. */
export interface LogReading {
  readonly file: string;
  readonly samples: Samples;
  readonly rows: number;
  /** s. */
  readonly duration: number;
  /** Median spacing of the rows, s. */
  readonly period: number;
  readonly columns: Columns;
  readonly moves: readonly LoggedMove[];
  readonly repairs: readonly string[];
  readonly warnings: readonly string[];
}

/** Reads a log file. @throws {LogError} with file, line and remedy when it cannot be used */
export async function readLog(path: string, options: ReadOptions = PLAIN_READ): Promise<LogReading> {
  return reading(() => fileText(path), options);
}

/** Reads a log from bytes: standard input, or what an outside plant printed. */
export async function readLogBytes(
  bytes: Uint8Array,
  name: string,
  options: ReadOptions = PLAIN_READ,
): Promise<LogReading> {
  return reading(() => bytesText(bytes, name), options);
}

/** What a log's first lines say of it: layout and columns, before a row is read. */
export interface LogShape {
  readonly layout: Layout;
  readonly columns: Columns;
  readonly warnings: readonly string[];
}

const HEAD_LINES = 400;
const HEAD_CHARACTERS = 1 << 18;

/** Looks at the first lines only. */
export async function shapeOf(source: TextSource, options: ReadOptions): Promise<LogShape> {
  const lines: string[] = [];
  let characters = 0;
  await eachLine(source.pieces, source.name, (text) => {
    lines.push(text);
    characters += text.length;
    return lines.length >= HEAD_LINES || characters >= HEAD_CHARACTERS ? 'stop' : undefined;
  });
  if (lines.every((line) => line.trim() === '')) {
    throw new LogError('empty', 'it is empty.', 'Log at least one move.', { file: source.name });
  }
  if (
    lines.some(
      (line) =>
        /[\u0001-\u0008\u000e-\u001a\ufffd]/.test(line.slice(0, 2000)) &&
        /[\u0001-\u0006\ufffd].*[\u0001-\u0006\ufffd]/.test(line),
    )
  ) {
    throw new LogError('binary', 'this is not text.', 'Export the log as CSV or JSON Lines.', { file: source.name });
  }
  const layout = layoutOf(lines, source.name);
  const { columns, warnings } = columnsOf(layout, { told: options.columns, ...options }, source.name);
  if (columns.setpoint === null && options.setpoint === 'needed') {
    throw new LogError(
      'no-setpoint',
      'no column was recognised as setpoint.',
      `Name it with --column setpoint=HEADER. Its columns are: ${layout.headers.join(', ')}.`,
      { file: source.name },
    );
  }
  return { layout, columns, warnings };
}

async function reading(open: () => TextSource, options: ReadOptions): Promise<LogReading> {
  const shape = await shapeOf(open(), options);
  const source = open();
  const rows = gatherer(shape.layout, shape.columns, source.name, options.rows === 'repaired');
  await eachRow(source.pieces, shape.layout, source.name, rows.take);
  const gathered = rows.end();
  if (gathered.rows < 2) {
    throw new LogError(
      'no-rows',
      `it holds ${gathered.rows} ${gathered.rows === 1 ? 'row' : 'rows'} of numbers.`,
      'A move needs at least a fifth of a second of rows.',
      { file: source.name },
    );
  }
  const warnings = [...shape.warnings];
  const raw = rows.samples();
  const samples = scaled(raw, shape.columns, warnings);
  const period = medianSpacing(samples.time);
  return {
    file: source.name,
    samples,
    rows: gathered.rows,
    duration: (samples.time.at(-1) ?? 0) - (samples.time[0] ?? 0),
    period,
    columns: withTimeScale(shape.columns, samples.time, raw.time),
    moves: splitMoves(samples),
    repairs: repairsOf(gathered),
    warnings: [...warnings, ...noticesOf(gathered)],
  };
}

/** Brings a log's columns into seconds from its first row at or after its start, and into the profile's units. */
export function scaled(samples: Samples, columns: Columns, warnings: string[]): Samples {
  const toSeconds = timeScale(samples.time, columns.time, warnings);
  const zero = (samples.time[0] ?? 0) * toSeconds;
  // A clock that does not start near zero is only an offset; one that does keeps its zero, where the step may be.
  const offset = Math.abs(zero) > 1e-9 && Math.abs(zero) < 1 ? 0 : zero;
  const by = (column: Column | null, values: Float64Array) =>
    column === null || column.scale === 1 ? values : values.map((value) => value * column.scale);
  return {
    ...samples,
    time: samples.time.map((time) => time * toSeconds - offset),
    setpoint: by(columns.setpoint, samples.setpoint),
    measured: by(columns.measured, samples.measured),
    output: samples.output && by(columns.output, samples.output),
    parts: samples.parts && {
      p: by(columns.p, samples.parts.p),
      i: by(columns.i, samples.parts.i),
      d: by(columns.d, samples.parts.d),
    },
  };
}

function timeScale(time: Float64Array, column: Column | null, warnings: string[]): number {
  if (column !== null && Number.isFinite(column.scale)) return column.scale;
  const step = medianSpacing(time);
  // No loop is logged once in 2 s, and none 500,000 times a second: a bare number that large counts ms or µs.
  const guess = step > 500 ? 1e-6 : step >= 1 ? 1e-3 : 1;
  if (guess !== 1)
    warnings.push(
      `The time column names no unit; rows come every ${step}, so it is taken as ${guess === 1e-3 ? 'ms' : 'µs'}.`,
    );
  return guess;
}

function withTimeScale(columns: Columns, seconds: Float64Array, raw: Float64Array): Columns {
  if (columns.time === null || Number.isFinite(columns.time.scale)) return columns;
  const span = (raw.at(-1) ?? 0) - (raw[0] ?? 0);
  const scale = span === 0 ? 1 : ((seconds.at(-1) ?? 0) - (seconds[0] ?? 0)) / span;
  return { ...columns, time: { ...columns.time, scale: Number(scale.toPrecision(6)) } };
}

function medianSpacing(time: Float64Array): number {
  if (time.length < 2) return 0;
  const steps = new Float64Array(time.length - 1);
  for (let row = 0; row < steps.length; row++) steps[row] = (time[row + 1] ?? 0) - (time[row] ?? 0);
  steps.sort();
  return steps[Math.floor(steps.length / 2)] ?? 0;
}

function repairsOf({ wentBack, dropped }: Gathered): readonly string[] {
  const rows = (count: number) => `${count} ${count === 1 ? 'row' : 'rows'}`;
  return [
    ...(wentBack > 0 ? [`Dropped ${rows(wentBack)} that went back in time.`] : []),
    ...(dropped > 0 ? [`Dropped ${rows(dropped)} without a number in every needed column.`] : []),
  ];
}

function noticesOf({ repeated, cutOff }: Gathered): readonly string[] {
  return [
    ...(repeated > 0
      ? [
          `${repeated} ${repeated === 1 ? 'row repeats' : 'rows repeat'} the time of the row before and ${repeated === 1 ? 'was' : 'were'} left out.`,
        ]
      : []),
    ...(cutOff ? ['The last row is cut off and was left out.'] : []),
  ];
}
