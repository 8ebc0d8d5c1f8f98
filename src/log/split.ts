import { type Samples, sliceSamples } from '../record/samples.ts';

/** One move of a log: rows `start` to `end` (not included), with time 0 at the setpoint's step. */
export interface LoggedMove {
  readonly start: number;
  readonly end: number;
  /** Where it stood when the setpoint moved, and where it was sent. */
  readonly from: number;
  readonly to: number;
  /** The setpoint went there along a ramp, not in a step. */
  readonly shaped: boolean;
  readonly samples: Samples;
}

/** s that a move must last to be one. */
const SHORTEST = 0.2;

/** s between changes of the setpoint that still belong to one shaped move. */
const SAME_MOVE = 0.15;

/**
 * Splits a log into its moves: by steps or ramps of the setpoint, and by stretches in which it was disabled. A log whose
 * setpoint stands still from the first row is one move from where it starts.
 */
export function splitMoves(samples: Samples): readonly LoggedMove[] {
  return enabledStretches(samples).flatMap(([start, end]) => movesWithin(samples, start, end));
}

function enabledStretches({ enabled, time }: Samples): readonly (readonly [number, number])[] {
  if (enabled === null) return [[0, time.length]];
  const stretches: [number, number][] = [];
  let start = -1;
  for (let row = 0; row <= time.length; row++) {
    const on = row < time.length && (enabled[row] ?? 0) > 0.5;
    if (on && start < 0) start = row;
    if (!on && start >= 0) {
      stretches.push([start, row]);
      start = -1;
    }
  }
  return stretches;
}

interface Change {
  /** First row with a new setpoint, and the last row of the change. */
  readonly first: number;
  readonly last: number;
}

function movesWithin(samples: Samples, start: number, end: number): readonly LoggedMove[] {
  const { setpoint, measured, time } = samples;
  if (end - start < 4) return [];
  const changes = changesOf(samples, start, end);
  const size = spread(setpoint, start, end);
  const firstStep = changes[0]?.first ?? end;
  const away = Math.abs((setpoint[start] ?? 0) - (measured[start] ?? 0));
  const leadIn = firstStep > start && away > Math.max(0.05 * size, 1e-9) && (size === 0 || away > 0.25 * size);
  const begins: readonly Change[] =
    leadIn || changes.length === 0 ? [{ first: start, last: start }, ...changes] : changes;
  return begins.flatMap((change, k) => {
    const stop = begins[k + 1]?.first ?? end;
    const from = standing(samples, change.first, start);
    const to = setpoint[stop - 1] ?? 0;
    const lasts = (time[stop - 1] ?? 0) - (time[change.first] ?? 0);
    if (!Number.isFinite(to) || to === from || lasts < SHORTEST) return [];
    return [
      {
        start: change.first,
        end: stop,
        from,
        to,
        shaped: change.last > change.first,
        samples: fromZero(samples, change.first, stop),
      },
    ];
  });
}

/** Runs of rows in which the setpoint changes by more than its own noise. */
function changesOf({ setpoint, time }: Samples, start: number, end: number): readonly Change[] {
  const least = 1e-6 * spread(setpoint, start, end);
  const changes: Change[] = [];
  for (let row = start + 1; row < end; row++) {
    if (Math.abs((setpoint[row] ?? 0) - (setpoint[row - 1] ?? 0)) <= least) continue;
    const open = changes.at(-1);
    if (open && (time[row] ?? 0) - (time[open.last] ?? 0) <= SAME_MOVE)
      changes[changes.length - 1] = { first: open.first, last: row };
    else changes.push({ first: row, last: row });
  }
  return changes;
}

/** Where it stood when the setpoint moved: the old setpoint if it had arrived there, else the reading. */
function standing({ setpoint, measured }: Samples, row: number, start: number): number {
  const reading = measured[Math.max(start, row - 1)] ?? 0;
  if (row <= start) return measured[row] ?? 0;
  const old = setpoint[row - 1] ?? 0;
  const step = Math.abs((setpoint[row] ?? 0) - old);
  return Math.abs(reading - old) < 0.02 * step ? old : reading;
}

function spread(values: Float64Array, start: number, end: number): number {
  let low = Number.POSITIVE_INFINITY;
  let high = Number.NEGATIVE_INFINITY;
  for (let row = start; row < end; row++) {
    low = Math.min(low, values[row] ?? 0);
    high = Math.max(high, values[row] ?? 0);
  }
  return high >= low ? high - low : 0;
}

function fromZero(samples: Samples, start: number, end: number): Samples {
  const cut = sliceSamples(samples, start, end);
  const zero = cut.time[0] ?? 0;
  return { ...cut, time: cut.time.map((time) => time - zero) };
}
