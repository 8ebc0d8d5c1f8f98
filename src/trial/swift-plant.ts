import type { RigidMotion } from '../plant/rigid.ts';
import { type Stride, strideOf, strideRigid } from '../plant/stride.ts';

/**
 * A plant laid out for even ticks. The reading of tick k shows the motion at t_k − D (sensor's delay D), and an output acts L after
 * its tick (plant's delay L). Only their sum shows in a record, so the motion is kept D behind the clock: between two readings it
 * sees one change of output, from `older` to `newer`, at the same point of every interval.
 */
export interface SwiftPlant {
  readonly motion: RigidMotion;
  /** 1 when its speed is what is measured, 0 when its position is. */
  readonly isSpeed: number;
  /** 1 on a stiff supply without a current limit, else 0. */
  readonly isPlain: number;
  /** Fractions of full output in one output unit. */
  readonly perUnit: number;
  /** Whole ticks of delay. */
  readonly wholeTicks: number;
  /** From a reading to the output's change; null when they coincide. */
  readonly before: Stride | null;
  /** From there to the next reading. */
  readonly after: Stride;
  readonly forward: Interval;
  readonly back: Interval;
}

/**
 * A whole interval in one direction while nothing happens, outputs in their own unit:
 *
 *   speed where the output changes = midKeep·speed + midGain·older − midLoss
 *   speed ← keep·speed + olderGain·older + gain·newer − loss
 *   position ← position + coast·speed + olderTravel·older + travel·newer − travelLoss
 */
export interface Interval {
  midKeep: number;
  midGain: number;
  midLoss: number;
  keep: number;
  olderGain: number;
  gain: number;
  loss: number;
  coast: number;
  olderTravel: number;
  travel: number;
  travelLoss: number;
  /** Position of the stop on this way. */
  stop: number;
}

/** Lays out an exactly solved plant whose output shows `delay` s later in the reading. */
export function swiftPlantOf(
  motion: RigidMotion,
  isSpeed: boolean,
  delay: number,
  period: number,
  perUnit: number,
): SwiftPlant {
  const { law } = motion;
  const wholeTicks = Math.floor(delay / period + 1e-9);
  const rest = delay - wholeTicks * period;
  const fraction = rest > 1e-9 * period ? rest : 0; // what is left by rounding is no delay
  const before = fraction > 0 ? strideOf(law, fraction) : null;
  const after = strideOf(law, period - fraction);
  return {
    motion,
    isSpeed: isSpeed ? 1 : 0,
    isPlain: law.isPlain ? 1 : 0,
    perUnit,
    wholeTicks,
    before,
    after,
    forward: intervalOf(before, after, perUnit, law.againstForward, law.max),
    back: intervalOf(before, after, perUnit, law.againstBack, law.min),
  };
}

function intervalOf(before: Stride | null, after: Stride, perUnit: number, against: number, stop: number): Interval {
  const first = before ?? { keep: 1, speedGain: 0, coast: 0, travelGain: 0 };
  const olderGain = after.keep * first.speedGain;
  const olderTravel = first.travelGain + after.coast * first.speedGain;
  const interval = unsetInterval();
  interval.midKeep = first.keep;
  interval.midGain = first.speedGain * perUnit;
  interval.midLoss = first.speedGain * against;
  interval.keep = after.keep * first.keep;
  interval.olderGain = olderGain * perUnit;
  interval.gain = after.speedGain * perUnit;
  interval.loss = (olderGain + after.speedGain) * against;
  interval.coast = first.coast + after.coast * first.keep;
  interval.olderTravel = olderTravel * perUnit;
  interval.travel = after.travelGain * perUnit;
  interval.travelLoss = (olderTravel + after.travelGain) * against;
  interval.stop = stop;
  return interval;
}

// NaN, not 0: an engine that first sees a whole number in a field plans for whole numbers there.
function unsetInterval(): Interval {
  const none = Number.NaN;
  return {
    midKeep: none,
    midGain: none,
    midLoss: none,
    keep: none,
    olderGain: none,
    gain: none,
    loss: none,
    coast: none,
    olderTravel: none,
    travel: none,
    travelLoss: none,
    stop: none,
  };
}

/** Moves the plant from the reading before `row` to that of `row`, whatever happens on the way. */
export function advanceToRow(plant: SwiftPlant, row: number, output: Float64Array): void {
  const { motion, before, after, perUnit } = plant;
  const latest = row - 1 - plant.wholeTicks;
  if (latest < 0) return; // held as it started until the first output arrives
  if (before !== null && latest > 0) strideRigid(motion, before, (output[latest - 1] ?? 0) * perUnit);
  strideRigid(motion, after, (output[latest] ?? 0) * perUnit);
}
