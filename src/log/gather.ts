import { printable } from '../record/printable.ts';
import type { Samples } from '../record/samples.ts';
import type { Column, Columns } from './columns.ts';
import { LogError } from './error.ts';
import { ROLES, type Role } from './headers.ts';
import type { Layout } from './layout.ts';
import { type Growing, growing, numberOf } from './numbers.ts';
import type { TakeRow } from './rows.ts';

/** Rows dropped or merged, and what was noticed while gathering. */
export interface Gathered {
  readonly rows: number;
  readonly wentBack: number;
  readonly repeated: number;
  readonly dropped: number;
  /** The last row was cut off in the middle and left out. */
  readonly cutOff: boolean;
}

/** Collects rows of cells as columns of numbers, checking each. */
export interface Gatherer {
  readonly take: TakeRow;
  /** Judges the row that was held back, which another has followed. */
  readonly complete: () => void;
  /** Judges the row that was held back (a last row may be cut off) and gives the tally. */
  readonly end: () => Gathered;
  /** Columns so far; time as the log has it. */
  readonly samples: () => Samples;
  readonly rows: () => number;
  readonly clear: () => void;
}

/**
 * @param repair  drop rows that go back in time or hold no number, and count them, instead of refusing the log
 */
export function gatherer(layout: Layout, columns: Columns, name: string, repair: boolean): Gatherer {
  const used = ROLES.flatMap((role): { role: Role; column: Column; held: Growing }[] => {
    const column = columns[role];
    return column === null ? [] : [{ role, column, held: growing() }];
  });
  const tally = { rows: 0, wentBack: 0, repeated: 0, dropped: 0 };
  const width = layout.headers.length;
  const values = new Float64Array(used.length);
  const timeAt = used.findIndex(({ role }) => role === 'time');
  let lastTime = Number.NEGATIVE_INFINITY;
  let waiting: { readonly cells: readonly string[]; readonly line: number } | null = null;

  const judge = (cells: readonly string[], line: number): void => {
    if (cells.length < width && !(cells.length === width - 1 && cells.at(-1) !== '')) {
      const needed = used.some(({ column }) => column.index >= cells.length);
      if (needed) {
        if (!repair) throw ragged(cells, width, name, line);
        tally.dropped++;
        return;
      }
    }
    for (let k = 0; k < used.length; k++) {
      const one = used[k];
      if (!one) continue;
      const cell = cells[one.column.index] ?? '';
      const value = numberOf(cell, layout.decimal);
      if (value === null || Number.isNaN(value)) {
        if (!repair) throw notANumber(cell, one.column, name, line);
        tally.dropped++;
        return;
      }
      values[k] = value;
    }
    const time = values[timeAt] ?? 0;
    if (time < lastTime) {
      if (!repair) throw wentBack(lastTime, time, columns.time, name, line);
      tally.wentBack++;
      return;
    }
    if (time === lastTime) {
      tally.repeated++;
      return;
    }
    lastTime = time;
    tally.rows++;
    used.forEach(({ held }, k) => {
      held.push(values[k] ?? 0);
    });
  };

  const column = (role: Role): Float64Array | null => used.find((one) => one.role === role)?.held.take() ?? null;
  return {
    take: (cells, line) => {
      if (waiting !== null) judge(waiting.cells, waiting.line);
      waiting = { cells, line };
    },
    complete: () => {
      if (waiting !== null) judge(waiting.cells, waiting.line);
      waiting = null;
    },
    end: () => {
      let cutOff = false;
      if (waiting !== null) {
        const short = waiting.cells.length < width;
        try {
          judge(waiting.cells, waiting.line);
        } catch (error) {
          // The last row of a log that was stopped by power may end in mid-number: that is no reason to lose the rest.
          if (!short || !(error instanceof LogError)) throw error;
          cutOff = true;
        }
        waiting = null;
      }
      return { ...tally, cutOff };
    },
    samples: () => {
      const p = column('p');
      const i = column('i');
      const d = column('d');
      const time = column('time') ?? new Float64Array(0);
      return {
        time,
        setpoint: column('setpoint') ?? new Float64Array(time.length).fill(Number.NaN),
        measured: column('measured') ?? new Float64Array(0),
        output: column('output'),
        supply: column('supply'),
        current: column('current'),
        enabled: column('enabled'),
        parts: p && i && d ? { p, i, d } : null,
      };
    },
    rows: () => used[0]?.held.length() ?? 0,
    clear: () => {
      for (const { held } of used) held.clear();
    },
  };
}

function ragged(cells: readonly string[], width: number, name: string, line: number): LogError {
  return new LogError(
    'ragged',
    `this row has ${cells.length} cells, the others ${width}.`,
    'Use --repair to drop such rows, or export the log again.',
    { file: name, line },
  );
}

function notANumber(cell: string, column: Column, name: string, line: number): LogError {
  const shown = cell.trim() === '' ? 'an empty cell' : `"${printable(cell.trim())}"`;
  return new LogError(
    'not-a-number',
    `column "${printable(column.header)}" holds ${shown} instead of a number.`,
    'Use --repair to drop such rows, or choose another column with --column.',
    { file: name, line, field: printable(column.header) },
  );
}

function wentBack(before: number, now: number, column: Column | null, name: string, line: number): LogError {
  const unit = column?.unit ?? '';
  const shown = (value: number) => `${value}${unit === '' ? '' : ` ${printable(unit)}`}`;
  return new LogError(
    'time-goes-back',
    `time goes back from ${shown(before)} to ${shown(now)}.`,
    'Use --repair to drop rows that go back, or log with one clock.',
    { file: name, line },
  );
}
