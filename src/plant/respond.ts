import { advance, type Start, startMotion } from './motion.ts';
import type { PlantModel } from './response-model.ts';

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
  const rows = into.length;
  if (rows === 0) return into;
  const { delay } = plant.response;
  const motion = startMotion(plant, start);
  const isSpeed = plant.quantity === 'speed';
  const first = (time[0] ?? 0) + delay;
  let clock = time[0] ?? 0;
  let arrived = -1;
  for (let row = 0; row < rows; row++) {
    const until = time[row] ?? clock;
    if (arrived < 0 && until < first) {
      into[row] = isSpeed ? start.speed : start.position + start.speed * (until - (time[0] ?? 0));
      continue;
    }
    if (arrived < 0) {
      motion.position = start.position + start.speed * delay;
      clock = first;
      arrived = 0;
    }
    for (;;) {
      const next = arrived + 1 < time.length ? (time[arrived + 1] ?? 0) + delay : Number.POSITIVE_INFINITY;
      if (next > until) break;
      if (next > clock) {
        advance(motion, output[arrived] ?? 0, next - clock);
        clock = next;
      }
      arrived++;
    }
    if (until > clock) {
      advance(motion, output[arrived] ?? 0, until - clock);
      clock = until;
    }
    into[row] = isSpeed ? motion.speed : motion.position;
  }
  return into;
}
