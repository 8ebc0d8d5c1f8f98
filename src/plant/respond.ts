import { advance, type Start, startMotion } from './motion.ts';
import type { PlantModel } from './response-model.ts';
import type { RigidMotion } from './rigid.ts';
import { type Stride, setStride, strideOf, strideRigid } from './stride.ts';

/**
 * Open-loop response: what the measured quantity does when a logged output drives the plant.
 *
 * The output in row k is held from time[k] to time[k+1] and acts on the plant response.delay later. Until the first row's
 * output arrives the mechanism carries on as it started: at rest (whatever held it there still does), or at its speed.
 *
 * @param start position and speed at time[0], profile unit; for a speed loop only `speed` matters
 * @param time s, not decreasing; uneven spacing is exact, too
 * @param output fraction of full output, as long as `time`
 * @param end rows to compute, counted from the first; the rest are left out
 * @returns position or speed (the plant's quantity) at each row's time
 */
export function respond(
  plant: PlantModel,
  start: Start,
  time: Float64Array,
  output: Float64Array,
  end: number = time.length,
): Float64Array {
  return respondInto(new Float64Array(end), plant, start, time, output);
}

/** {@link respond} into a given column, whose length says how many rows to compute. Returns the column. */
export function respondInto(
  into: Float64Array,
  plant: PlantModel,
  start: Start,
  time: Float64Array,
  output: Float64Array,
): Float64Array {
  const { delay } = plant.response;
  const isSpeed = plant.quantity === 'speed';
  const begin = time[0] ?? 0;
  const first = begin + delay;
  let row = 0;
  for (; row < into.length && (time[row] ?? 0) < first; row++) {
    into[row] = isSpeed ? start.speed : start.position + start.speed * ((time[row] ?? 0) - begin);
  }

  const motion = startMotion(plant, { position: start.position + start.speed * delay, speed: start.speed });
  const { state } = motion;
  // Evenly spaced rows ask for the same two durations over and over: row to arrival, arrival to row.
  const toArrival = motion.solver === 'exact' ? strideOf(motion.state.law, 1) : null;
  const toRow = motion.solver === 'exact' ? strideOf(motion.state.law, 1) : null;
  let clock = first;
  let arrived = 0;
  for (; row < into.length; row++) {
    const until = time[row] ?? 0;
    for (let isDone = false; !isDone; ) {
      const arrival = arrived + 1 < time.length ? (time[arrived + 1] ?? 0) + delay : Number.POSITIVE_INFINITY;
      isDone = arrival > until;
      const next = isDone ? until : arrival;
      if (next > clock) {
        const stride = isDone ? toRow : toArrival;
        if (motion.solver === 'exact' && stride) moveExactly(motion.state, stride, output[arrived] ?? 0, next - clock);
        else advance(motion, output[arrived] ?? 0, next - clock);
        clock = next;
      }
      if (!isDone) arrived++;
    }
    into[row] = isSpeed ? state.speed : state.position;
  }
  return into;
}

// Times of even rows differ by rounding: 1e-13 s at 1000 s. Taken as the same, they move nothing by more than this share.
const SAME_DURATION = 1e-11;

function moveExactly(state: RigidMotion, stride: Stride, u: number, duration: number): void {
  if (Math.abs(duration - stride.duration) > SAME_DURATION * duration) setStride(stride, state.law, duration, 1);
  strideRigid(state, stride, u);
}
