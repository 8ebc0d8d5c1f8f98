import { type Controller, tick } from '../controller/tick.ts';
import { quantise } from '../plant/quantise.ts';
import type { PlantModel } from '../plant/response-model.ts';
import type { RigidMotion } from '../plant/rigid.ts';
import { strideOf, strideRigid } from '../plant/stride.ts';
import type { TrialStand } from './stand.ts';

/**
 * A trial with even ticks on an exactly solved plant: the loop of the search, which runs it millions of ticks a second.
 *
 * The reading of tick k shows the motion at t_k − D (sensor's delay D), and an output acts L after its tick (plant's delay L).
 * Only their sum shows in the record, so the motion is kept D behind the clock: between two readings it sees one output change,
 * at the same point of every interval, and the two strides on either side of it are worked out once.
 *
 * @returns rows written
 */
export function runEven(
  stand: TrialStand,
  controller: Controller,
  motion: RigidMotion,
  plant: PlantModel,
  lost: number,
): number {
  const { time, setpoint, setpointSpeed, measured, output, parts, noise, counts, perUnit, period } = stand;
  const isSpeed = plant.quantity === 'speed';
  const { whole, fraction } = splitDelay(plant.response.delay + stand.reading.delay, period);
  const before = fraction > 0 ? strideOf(motion.law, fraction) : null;
  const after = strideOf(motion.law, period - fraction);
  const rows = time.length;
  for (let row = 0; row < rows; row++) {
    const latest = row - 1 - whole;
    if (latest >= 0) {
      if (before !== null && latest > 0) strideRigid(motion, before, (output[latest - 1] ?? 0) * perUnit);
      strideRigid(motion, after, (output[latest] ?? 0) * perUnit);
    }
    let reading = isSpeed ? motion.speed : motion.position;
    if (noise !== null) reading += noise[row] ?? 0;
    if (counts > 0) reading = quantise(reading, counts);
    measured[row] = reading;
    const target = setpoint[row] ?? 0;
    output[row] = tick(controller, time[row] ?? 0, target, reading, setpointSpeed[row] ?? 0);
    if (parts !== null) {
      parts.p[row] = controller.p;
      parts.i[row] = controller.i;
      parts.d[row] = controller.d;
    }
    if (Math.abs(target - reading) > lost) return row + 1;
  }
  return rows;
}

/** A delay in whole periods and the rest, s; a rest that is rounding is none. */
function splitDelay(delay: number, period: number): { whole: number; fraction: number } {
  const whole = Math.floor(delay / period + 1e-9);
  const fraction = delay - whole * period;
  return { whole, fraction: fraction > 1e-9 * period ? fraction : 0 };
}
