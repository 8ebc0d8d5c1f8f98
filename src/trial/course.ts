import { wrapError } from '../controller/tick.ts';
import type { Move } from '../mechanism/profile.ts';
import type { Samples } from '../record/samples.ts';

/** A move as seen by its figures: error and progress row by row, glitches left out. */
export interface Course {
  readonly time: Float64Array;
  /** Setpoint − measured, wrapped, profile unit. */
  readonly error: Float64Array;
  /** Share of the move done: 0 at the start, 1 on target. */
  readonly progress: Float64Array;
  /** Rows of the samples that the course keeps. */
  readonly rows: Int32Array;
  /** Rows left out: single samples that jump away and straight back. */
  readonly glitches: readonly number[];
}

/**
 * A move as it is travelled: on a wrapping scale the short way round, so that 350 to 20 of 360 is 30 onward, not 330 back.
 */
export function straightMove(move: Move, continuous: number | null): Move {
  return continuous === null ? move : { from: move.from, to: move.from + wrapError(move.to - move.from, continuous) };
}

/**
 * Error and progress of a move. A single sample that stands apart from both neighbours by more than half the move and six
 * times what those differ by is a glitch of the log, not motion: it is left out and named.
 */
export function courseOf(samples: Samples, move: Move, continuous: number | null): Course {
  const { time, setpoint, measured } = samples;
  const whole = move.to - move.from;
  const size = whole === 0 ? 1 : whole;
  const glitches = glitchesOf(measured, Math.abs(size), continuous);
  const skip = new Set(glitches);
  const rows = Int32Array.from(time.keys()).filter((row) => !skip.has(row));
  const error = Float64Array.from(rows, (row) => wrapError((setpoint[row] ?? 0) - (measured[row] ?? 0), continuous));
  const progress = Float64Array.from(rows, (row) => {
    const left = wrapError(move.to - (measured[row] ?? 0), continuous);
    return 1 - left / size;
  });
  return { time: Float64Array.from(rows, (row) => time[row] ?? 0), error, progress, rows, glitches };
}

function glitchesOf(measured: Float64Array, size: number, continuous: number | null): readonly number[] {
  const found: number[] = [];
  for (let row = 1; row + 1 < measured.length; row++) {
    const before = measured[row - 1] ?? 0;
    const here = measured[row] ?? 0;
    const after = measured[row + 1] ?? 0;
    const out = wrapError(here - before, continuous);
    const back = wrapError(here - after, continuous);
    const between = Math.abs(wrapError(after - before, continuous));
    const apart = Math.min(Math.abs(out), Math.abs(back));
    if (Math.sign(out) === Math.sign(back) && apart > 0.5 * size && apart > 6 * between) found.push(row);
  }
  return found;
}
