import type { ResponseModel } from '../plant/response-model.ts';
import type { Drive } from './evidence.ts';
import { backSubstitute, newColumns, triangulate } from './qr.ts';

/** What a guess leaves at its base: drag, hold, both or nothing. */
interface Sought {
  readonly drag: boolean;
  readonly hold: boolean;
}

/**
 * First guesses of a response model straight from the records, two a dead time (drag sought, or left at the base's): no start value is
 * needed, and no scale.
 *
 * The law of motion, integrated until no derivative of a reading is left in it, is linear in what is sought. With m = 1 while it
 * moves and 0 at rest, a speed obeys  ∫v = K·∫u·m − K·c·∫sgn v·m − K·h·∫m − τ·(v − v₀); a position the same, integrated once more.
 *
 * @param base what is kept where it is not sought
 * @param delays s
 * @param carries whether the mechanism has a constant weight, so that hold is sought, too
 */
export function guessesFrom(
  drives: readonly Drive[],
  base: ResponseModel,
  delays: readonly number[],
  carries: boolean,
): readonly ResponseModel[] {
  return delays.flatMap((delay) => {
    const terms = drives.map((drive) => integralsOf(drive, delay));
    const guesses = [true, false].map((drag) => solve(terms, base, delay, { drag, hold: carries }));
    return guesses.filter((guess) => guess !== null);
  });
}

/** Columns of the integrated law, row by row. */
interface Integrals {
  readonly motion: Float64Array;
  readonly output: Float64Array;
  readonly rubbing: Float64Array;
  readonly moving: Float64Array;
  readonly change: Float64Array;
}

function integralsOf(drive: Drive, delay: number): Integrals {
  const { time, measured, quantity } = drive;
  const first = measured[0] ?? 0;
  const way = waysOf(drive);
  const arrived = arrivedBy(drive, delay);
  const pushed = new Float64Array(time.length);
  for (let row = 1; row < time.length; row++) {
    const moves = (way[row] ?? 0) !== 0 ? 1 : 0;
    pushed[row] = (pushed[row - 1] ?? 0) + moves * ((arrived[row] ?? 0) - (arrived[row - 1] ?? 0));
  }
  const rubbed = integrated(time, way);
  const moved = integrated(
    time,
    way.map((sign) => Math.abs(sign)),
  );
  if (quantity === 'speed') {
    return {
      motion: integrated(time, measured),
      output: pushed,
      rubbing: rubbed,
      moving: moved,
      change: measured.map((value) => value - first),
    };
  }
  const begin = time[0] ?? 0;
  const travelled = measured.map((value) => value - first);
  return {
    motion: integrated(time, travelled),
    output: integrated(time, pushed),
    rubbing: integrated(time, rubbed),
    moving: integrated(time, moved),
    change: travelled.map((value, row) => value - drive.start.speed * ((time[row] ?? 0) - begin)),
  };
}

/** Which way it moves at each row: 1, −1, or 0 where the readings around it do not tell it from rest. */
function waysOf({ time, measured, quantity, floor }: Drive): Float64Array {
  const last = time.length - 1;
  return measured.map((value, row) => {
    const change = (measured[Math.min(last, row + 2)] ?? 0) - (measured[Math.max(0, row - 2)] ?? 0);
    const motion = quantity === 'speed' ? value : change;
    return Math.abs(motion) > 3 * floor ? Math.sign(motion) : 0;
  });
}

/** Integral of the output as it has arrived at each row, `delay` s after it was sent. */
function arrivedBy({ time, output }: Drive, delay: number): Float64Array {
  const sent = new Float64Array(time.length);
  for (let row = 1; row < time.length; row++) {
    sent[row] = (sent[row - 1] ?? 0) + (output[row - 1] ?? 0) * ((time[row] ?? 0) - (time[row - 1] ?? 0));
  }
  let at = 0;
  return time.map((now) => {
    const when = now - delay;
    while (at + 1 < time.length && (time[at + 1] ?? 0) <= when) at++;
    return when < (time[0] ?? 0) ? 0 : (sent[at] ?? 0) + (output[at] ?? 0) * (when - (time[at] ?? 0));
  });
}

/** Running integral by the trapezoidal rule. */
function integrated(time: Float64Array, values: Float64Array): Float64Array {
  const sums = new Float64Array(values.length);
  for (let row = 1; row < values.length; row++) {
    const dt = (time[row] ?? 0) - (time[row - 1] ?? 0);
    sums[row] = (sums[row - 1] ?? 0) + 0.5 * dt * ((values[row] ?? 0) + (values[row - 1] ?? 0));
  }
  return sums;
}

function solve(terms: readonly Integrals[], base: ResponseModel, delay: number, sought: Sought): ResponseModel | null {
  const rows = terms.reduce((sum, { motion }) => sum + motion.length, 0);
  const dragAt = sought.drag ? 2 : -1;
  const holdAt = sought.hold ? 2 + Number(sought.drag) : -1;
  const columns = newColumns(rows, 2 + Number(sought.drag) + Number(sought.hold));
  const right = new Float64Array(rows);
  let row = 0;
  for (const { motion, output, rubbing, moving, change } of terms) {
    for (let k = 0; k < motion.length; k++, row++) {
      const kept = (sought.drag ? 0 : base.drag * (rubbing[k] ?? 0)) + (sought.hold ? 0 : base.hold * (moving[k] ?? 0));
      right[row] = motion[k] ?? 0;
      columns.values[row] = (output[k] ?? 0) - kept;
      columns.values[rows + row] = -(change[k] ?? 0);
      if (sought.drag) columns.values[dragAt * rows + row] = -(rubbing[k] ?? 0);
      if (sought.hold) columns.values[holdAt * rows + row] = -(moving[k] ?? 0);
    }
  }
  const triangle = triangulate(columns, right);
  const found = backSubstitute(triangle, triangle.turned);
  const topSpeed = found[0] ?? 0;
  const lag = found[1] ?? 0;
  if (!(topSpeed > 0) || !Number.isFinite(topSpeed + lag)) return null;
  const drag = sought.drag ? clamped((found[dragAt] ?? 0) / topSpeed, 0.1 * base.drag, 0.5) : base.drag;
  const ratio = base.breakaway / Math.max(base.drag, 1e-9);
  return {
    topSpeed,
    // A lag that the readings cannot tell from none starts at a small one, from which a fit can move.
    lag: Math.max(lag, 0.1 * base.lag),
    drag,
    dragBack: drag,
    breakaway: drag * ratio,
    breakawayBack: drag * ratio,
    hold: sought.hold ? clamped((found[holdAt] ?? 0) / topSpeed, -1, 1) : base.hold,
    delay,
  };
}

const clamped = (value: number, low: number, high: number): number => Math.max(low, Math.min(high, value));
