import { LogError } from './error.ts';

/** How a log is laid out, found from its first lines. */
export interface Layout {
  readonly kind: 'table' | 'json-lines';
  /** One character, or 'blank' for runs of blanks. */
  readonly delimiter: string;
  readonly decimal: '.' | ',';
  /** Names as they stand in the file; 1, 2, 3 … when it has none. */
  readonly headers: readonly string[];
  /** Units from a row of their own, one a column, or null. */
  readonly unitRow: readonly string[] | null;
  /** Lines before the first row of numbers. */
  readonly skip: number;
  readonly hasHeader: boolean;
}

const COMMENT = /^\s*(#|\/\/|%|\*)/;
const NUMBER = /^[+-]?(\d+([.,]\d*)?|[.,]\d+)([eE][+-]?\d+)?$/;
const MISSING = /^(nan|inf|-inf|null|na)?$/i;

/**
 * Finds the layout in the first lines of a log: separator, decimal sign, header and unit rows, where the numbers start.
 *
 * @param lines the first few hundred lines, without their ends
 * @throws {LogError} when no rows of numbers are found
 */
export function layoutOf(lines: readonly string[], name: string): Layout {
  const firstFull = lines.findIndex((line) => line.trim() !== '' && !COMMENT.test(line));
  if (firstFull < 0) throw new LogError('empty', 'it holds no rows.', 'Log at least one move.', { file: name });
  if (lines[firstFull]?.trimStart().startsWith('{')) return jsonLayout(lines, firstFull, name);
  const options = [',', ';', '\t', '|', 'blank'].map((delimiter) => ({
    delimiter,
    block: numericBlock(lines, delimiter),
  }));
  const best = options.reduce((a, b) => (scoreOf(b.block) > scoreOf(a.block) ? b : a));
  if (best.block === null) {
    const shown = lines.slice(firstFull).length;
    throw new LogError(
      'no-rows',
      shown <= 1 ? 'it holds a header and no rows.' : 'no rows of numbers were found in it.',
      'A log is one header row and one row of numbers a sample.',
      { file: name, line: firstFull + 1 },
    );
  }
  return tableLayout(lines, best.delimiter, best.block);
}

interface Block {
  readonly first: number;
  readonly columns: number;
  readonly rows: number;
  readonly decimal: '.' | ',';
}

const scoreOf = (block: Block | null) =>
  block === null ? -1 : block.rows * Math.min(block.columns, 12) + block.columns;

/** First run of lines that split into two or more cells, nearly all of them numbers. */
function numericBlock(lines: readonly string[], delimiter: string): Block | null {
  for (let first = 0; first < lines.length; first++) {
    const cells = splitLine(lines[first] ?? '', delimiter);
    if (!isNumeric(cells, delimiter)) continue;
    const columns = cells.length;
    let rows = 0;
    let commas = 0;
    let points = 0;
    for (let at = first; at < lines.length; at++) {
      const row = splitLine(lines[at] ?? '', delimiter);
      if (row.length === columns && isNumeric(row, delimiter)) rows++;
      commas += row.filter((cell) => /\d,\d/.test(cell)).length;
      points += row.filter((cell) => /\d\.\d/.test(cell)).length;
    }
    return { first, columns, rows, decimal: delimiter !== ',' && commas > points ? ',' : '.' };
  }
  return null;
}

function isNumeric(cells: readonly string[], delimiter: string): boolean {
  if (cells.length < 2) return false;
  const filled = cells.map((cell) => cell.trim());
  const numbers = filled.filter((cell) => NUMBER.test(cell) && !(delimiter === ',' && cell.includes(','))).length;
  const missing = filled.filter((cell) => MISSING.test(cell)).length;
  return numbers >= 2 && numbers + missing >= 0.6 * cells.length;
}

/** Splits one line as a parser would that knows quotes; for looking only. */
function splitLine(line: string, delimiter: string): readonly string[] {
  if (delimiter === 'blank') return line.trim() === '' ? [] : line.trim().split(/[ \t]+/);
  if (!line.includes('"')) return line.split(delimiter);
  const cells: string[] = [];
  let cell = '';
  let quoted = false;
  for (const char of line) {
    if (char === '"') quoted = !quoted;
    else if (char === delimiter && !quoted) {
      cells.push(cell);
      cell = '';
    } else cell += char;
  }
  cells.push(cell);
  return cells;
}

/** The lines right above the numbers are the header and, under it, perhaps a row of units. */
function tableLayout(lines: readonly string[], delimiter: string, block: Block): Layout {
  const above: { readonly cells: readonly string[]; readonly at: number }[] = [];
  for (let at = block.first - 1; at >= 0 && above.length < 2; at--) {
    const line = (lines[at] ?? '').replace(/^\uFEFF/, '');
    if (line.trim() === '') continue;
    const bare = COMMENT.test(line) ? line.replace(COMMENT, '') : line;
    const cells = splitLine(bare, delimiter).map((cell) => cell.trim());
    if (Math.abs(cells.length - block.columns) > 1) break;
    above.push({ cells, at });
  }
  const [low, high] = above;
  const unitsBelow =
    low !== undefined && high !== undefined && low.cells.every(looksLikeUnit) && !high.cells.every(looksLikeUnit);
  const header = unitsBelow ? high : low;
  return {
    kind: 'table',
    delimiter,
    decimal: block.decimal,
    headers: Array.from({ length: block.columns }, (_, k) => header?.cells[k] || String(k + 1)),
    unitRow: unitsBelow && low ? low.cells : null,
    skip: block.first,
    hasHeader: header !== undefined,
  };
}

function looksLikeUnit(cell: string): boolean {
  return /^[[(]?\s*(|-|s|sec|ms|us|µs|m|cm|mm|in|ft|deg|°|rad|rev|rpm|v|a|%|[a-z°]+\/s|counts?|ticks?)\s*[\])]?$/i.test(
    cell,
  );
}

function jsonLayout(lines: readonly string[], first: number, name: string): Layout {
  let row: unknown;
  try {
    row = JSON.parse(lines[first] ?? '');
  } catch {
    throw new LogError('not-a-number', 'this line is not JSON.', 'JSON Lines hold one object a line.', {
      file: name,
      line: first + 1,
    });
  }
  const headers = typeof row === 'object' && row !== null ? Object.keys(row) : [];
  return { kind: 'json-lines', delimiter: '', decimal: '.', headers, unitRow: null, skip: first, hasHeader: true };
}
