import { type Controller, tick } from '../controller/tick.ts';
import { advance, type Motion } from '../plant/motion.ts';
import { quantise } from '../plant/quantise.ts';
import type { PlantModel } from '../plant/response-model.ts';
import type { TrialStand } from './stand.ts';

/**
 * A trial in general: ticks may be uneven, the sensor may have a period of its own, the plant may need sub-steps. Both delays are
 * exact: the motion is moved to the very time that a reading shows, stopping at every output that arrives before.
 *
 * @returns rows written
 */
export function runStepwise(
  stand: TrialStand,
  controller: Controller,
  motion: Motion,
  plant: PlantModel,
  lost: number,
): number {
  const { time, setpoint, setpointSpeed, measured, output, parts, noise, counts, perUnit } = stand;
  const { state } = motion;
  const isSpeed = plant.quantity === 'speed';
  const { delay } = plant.response;
  // Held as it started until the first output arrives.
  let clock = delay;
  let arrived = 0;
  let shown = Number.NEGATIVE_INFINITY;
  let readings = 0;
  let reading = 0;
  for (let row = 0; row < time.length; row++) {
    const now = time[row] ?? 0;
    const until = shownAt(now, stand.reading.delay, stand.reading.period);
    for (let isDone = false; !isDone; ) {
      const arrival = arrived + 1 < row ? (time[arrived + 1] ?? 0) + delay : Number.POSITIVE_INFINITY;
      isDone = arrival > until;
      const next = isDone ? until : arrival;
      if (next > clock) {
        advance(motion, (output[arrived] ?? 0) * perUnit, next - clock);
        clock = next;
      }
      if (!isDone) arrived++;
    }
    if (until > shown) {
      shown = until;
      reading = isSpeed ? state.speed : state.position;
      if (noise !== null) reading += noise[readings] ?? 0;
      if (counts > 0) reading = quantise(reading, counts);
      readings++;
    }
    measured[row] = reading;
    const target = setpoint[row] ?? 0;
    output[row] = tick(controller, now, target, reading, setpointSpeed[row] ?? 0);
    if (parts !== null) {
      parts.p[row] = controller.p;
      parts.i[row] = controller.i;
      parts.d[row] = controller.d;
    }
    if (Math.abs(target - reading) > lost) return row + 1;
  }
  return time.length;
}

/** Time of the motion that a tick at `now` gets to see: `delay` ago, at the sensor's last update if it has its own period. */
function shownAt(now: number, delay: number, period: number): number {
  const at = now - delay;
  return period > 0 ? Math.floor(at / period + 1e-9) * period : at;
}
