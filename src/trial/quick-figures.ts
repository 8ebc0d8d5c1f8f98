import { type ControllerSettings, fullOutput } from '../controller/settings.ts';
import { wrapError } from '../controller/tick.ts';
import type { Move } from '../mechanism/profile.ts';
import { straightMove } from './course.ts';
import { DWELL, entryTime } from './figures.ts';
import { reversalsOf } from './reversals.ts';
import type { TrialColumns } from './runner.ts';

/** The few figures that a search compares, measured without an allocation. */
export interface QuickFigures {
  /** s; null when it does not end inside, or has been inside for less than the dwell. */
  readonly settlingTime: number | null;
  /** %. */
  readonly overshoot: number;
  /** Setpoint − measured in the last row. */
  readonly endError: number;
  /** Does a swing about the target grow, or go on at full stretch to the end? */
  readonly growing: boolean;
  /** Output reversals a second larger than 2 % of full output. */
  readonly chatter: number;
}

export interface QuickOptions {
  readonly move: Move;
  readonly tolerance: number;
  readonly continuous: number | null;
  readonly resolution: number;
  readonly controller: ControllerSettings;
}

/** The quick figures of the first `rows` rows; definitions as in `figuresOf`, whose values they share. */
export function quickFigures(columns: TrialColumns, rows: number, options: QuickOptions): QuickFigures {
  const { continuous } = options;
  const straight = straightMove(options.move, continuous);
  const whole = straight.to - straight.from;
  const sign = Math.sign(whole) || 1;
  const size = Math.max(Math.abs(whole), 1e-12);
  const { time, setpoint, measured } = columns;
  let overshoot = 0;
  let lastOutside = -1;
  for (let row = 0; row < rows; row++) {
    const error = wrapError((setpoint[row] ?? 0) - (measured[row] ?? 0), continuous);
    if (Math.abs(error) > options.tolerance) lastOutside = row;
    const past = -sign * error;
    if (past > overshoot) overshoot = past;
  }
  const last = rows - 1;
  const endError = wrapError((setpoint[last] ?? 0) - (measured[last] ?? 0), continuous);
  return {
    settlingTime: settledAt(columns, lastOutside, rows, options),
    overshoot: (100 * overshoot) / size,
    endError,
    growing: isGrowing(columns, rows, options),
    chatter: reversalsOf(columns.output, time, 0.02 * fullOutput(options.controller), rows),
  };
}

function settledAt(columns: TrialColumns, lastOutside: number, rows: number, options: QuickOptions): number | null {
  const { time, setpoint, measured } = columns;
  const end = time[rows - 1] ?? 0;
  if (lastOutside < 0) return end - (time[0] ?? 0) >= DWELL ? 0 : null;
  if (lastOutside >= rows - 1) return null;
  const errorAt = (row: number) => wrapError((setpoint[row] ?? 0) - (measured[row] ?? 0), options.continuous);
  const after = lastOutside + 1;
  const entered = entryTime(
    time[lastOutside] ?? 0,
    time[after] ?? 0,
    errorAt(lastOutside),
    errorAt(after),
    options.tolerance,
  );
  return end - entered >= DWELL - 1e-9 ? entered : null;
}

/** Swings that end no smaller than they began, or as wide as a fifth of the move: successive turning points of the error. */
function isGrowing(columns: TrialColumns, rows: number, options: QuickOptions): boolean {
  const { setpoint, measured } = columns;
  const straight = straightMove(options.move, options.continuous);
  const size = Math.abs(straight.to - straight.from);
  const least = Math.max(options.tolerance, 3 * options.resolution, 0.01 * size);
  let extreme = 0;
  let side = 0;
  let count = 0;
  let first = 0;
  let previous = 0;
  let latest = 0;
  for (let row = 0; row < rows; row++) {
    const error = wrapError((setpoint[row] ?? 0) - (measured[row] ?? 0), options.continuous);
    if (Math.abs(error) > 15 * Math.max(size, least)) return true;
    const now = Math.abs(error) < least ? 0 : Math.sign(error);
    if (now !== 0 && now !== side) {
      if (side !== 0) {
        count++;
        if (count === 2) first = extreme;
        previous = latest;
        latest = extreme;
      }
      side = now;
      extreme = 0;
    }
    if (side !== 0 && now === side) extreme = Math.max(extreme, Math.abs(error));
  }
  // The first turning is the move itself; three more, none smaller than the last but one, is a swing that stays or grows.
  return count >= 5 && latest >= 0.97 * previous && latest >= 0.9 * first && latest > least;
}
