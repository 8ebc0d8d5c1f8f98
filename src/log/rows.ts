import { parse } from 'csv-parse';
import { printable } from '../record/printable.ts';
import { LogError } from './error.ts';
import type { Layout } from './layout.ts';

/** Characters of one row that no honest log needs; a longer one is refused, so that memory stays bounded. */
const LONGEST_ROW = 1 << 16;

/** Takes the cells of one row, and the line it ends on. */
export type TakeRow = (cells: readonly string[], line: number) => void;

/**
 * Feeds a log's rows of cells to `take`, from the first row of numbers on. Separated tables go through csv-parse (RFC 4180 quotes
 * included); blank-separated tables and JSON Lines are split line by line, since no separator of theirs can be quoted.
 */
export async function eachRow(
  pieces: AsyncIterable<string>,
  layout: Layout,
  name: string,
  take: TakeRow,
): Promise<void> {
  if (layout.kind === 'table' && layout.delimiter !== 'blank') return separatedRows(pieces, layout, name, take);
  await eachLine(pieces, name, (text, line) => {
    if (line <= layout.skip || text.trim() === '' || /^\s*(#|\/\/|%)/.test(text)) return;
    take(layout.kind === 'json-lines' ? jsonCells(text, layout, line, name) : text.trim().split(/[ \t]+/), line);
  });
}

async function separatedRows(
  pieces: AsyncIterable<string>,
  layout: Layout,
  name: string,
  take: TakeRow,
): Promise<void> {
  let failure: unknown = null;
  const parser = parse({
    delimiter: layout.delimiter,
    relax_column_count: true,
    relax_quotes: true,
    skip_empty_lines: true,
    from_line: layout.skip + 1,
    max_record_size: LONGEST_ROW,
    on_record: (cells: readonly string[], context) => {
      take(cells, context.lines);
      return null;
    },
  });
  parser.on('error', (error) => {
    failure = error;
  });
  parser.resume();
  const done = new Promise<void>((resolve) => {
    parser.on('close', resolve);
    parser.on('end', resolve);
  });
  for await (const piece of pieces) {
    if (failure !== null) break;
    // A parser that fails in the middle of a piece closes and never drains.
    if (!parser.write(piece) && !parser.destroyed) {
      await new Promise((resolve) => {
        parser.once('drain', resolve);
        parser.once('close', resolve);
      });
    }
  }
  parser.end();
  await done;
  if (failure !== null) throw asLogError(failure, name);
}

function asLogError(error: unknown, name: string): unknown {
  if (error instanceof LogError || !(error instanceof Error)) return error;
  const line = 'lines' in error && typeof error.lines === 'number' ? error.lines : undefined;
  const at = line === undefined ? { file: name } : { file: name, line };
  const code = 'code' in error ? error.code : '';
  if (code === 'CSV_MAX_RECORD_SIZE') {
    return new LogError(
      'too-long',
      `a row is longer than ${LONGEST_ROW} characters.`,
      'Check that this is a log; a quote that never closes also makes one endless row.',
      at,
    );
  }
  if (code === 'CSV_QUOTE_NOT_CLOSED') {
    return new LogError(
      'truncated',
      'a quote is opened and never closed.',
      'The file is cut off or damaged; export it again.',
      at,
    );
  }
  return new LogError(
    'not-a-number',
    `it does not read as a table: ${printable(error.message)}`,
    'Export it again as plain CSV.',
    at,
  );
}

/** Lines of a text in pieces: CR, LF or both. */
export async function eachLine(
  pieces: AsyncIterable<string>,
  name: string,
  take: (text: string, line: number) => 'stop' | undefined,
): Promise<void> {
  let rest = '';
  let line = 0;
  for await (const piece of pieces) {
    const text = rest + piece;
    const lines = text.split(/\r\n|\n|\r(?!$)/);
    rest = lines.pop() ?? '';
    for (const one of lines) if (take(one, ++line) === 'stop') return;
    if (rest.length > LONGEST_ROW) {
      throw new LogError('too-long', `a line is longer than ${LONGEST_ROW} characters.`, 'Check that this is a log.', {
        file: name,
        line: line + 1,
      });
    }
  }
  if (rest !== '') take(rest.replace(/\r$/, ''), line + 1);
}

function jsonCells(text: string, layout: Layout, line: number, name: string): readonly string[] {
  let row: unknown;
  try {
    row = JSON.parse(text);
  } catch {
    throw new LogError(
      'not-a-number',
      'this line is not JSON.',
      'JSON Lines hold one object a line; a last line that is cut off can be deleted.',
      { file: name, line },
    );
  }
  if (typeof row !== 'object' || row === null) {
    throw new LogError('not-a-number', 'this line is not a JSON object.', 'JSON Lines hold one object a line.', {
      file: name,
      line,
    });
  }
  const fields = new Map<string, unknown>(Object.entries(row));
  return layout.headers.map((header) => {
    const value = fields.get(header);
    return typeof value === 'boolean'
      ? String(Number(value))
      : value === undefined || value === null
        ? ''
        : String(value);
  });
}
