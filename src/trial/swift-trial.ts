import { type Controller, wrapError } from '../controller/tick.ts';
import { quantise } from '../plant/quantise.ts';
import { stallForce } from '../plant/rigid-law.ts';
import type { TrialStand } from './stand.ts';
import { advanceToRow, type SwiftPlant } from './swift-plant.ts';
import { type SwiftRun, startRun } from './swift-run.ts';

/** Does the loop below have all of this controller and this stand? */
export function isSwift(controller: Controller, stand: TrialStand): boolean {
  return !controller.isPaced && controller.slew === Number.POSITIVE_INFINITY && stand.parts === null;
}

// The engine plans its best code for a function that is called often and returns soon; one call for a whole trial is neither, and
// in one process of sixteen it stayed at code six times slower (Node 20). Also how often a trial is looked at for being lost.
const BLOCK = 128;

/**
 * A trial with even ticks on an exactly solved plant, a step of the setpoint, and a controller without slew, pace or turning hold:
 * the loop of the search, tens of millions of ticks a second. It is cut into stretches in which nothing happens: the mechanism
 * moves on one way, or rests. Each says on plain numbers what `tick` and `strideRigid` say and agrees with them to rounding
 * (test/trial/simulate.test.ts); what happens between two stretches is left to `strideRigid`.
 *
 * @returns rows written
 */
export function runSwift(
  stand: TrialStand,
  controller: Controller,
  plant: SwiftPlant,
  run: SwiftRun,
  lost: number,
): number {
  const { motion } = plant;
  const { output, measured, noise } = stand;
  const target = stand.setpoint[0] ?? 0;
  const rows = output.length;
  startRun(run, controller, target, stand.period);
  for (let row = 0; ; ) {
    const end = Math.min(rows, row + BLOCK);
    const isResting = motion.speed === 0 && noise === null;
    row = isResting
      ? restRows(stand, controller, plant, run, row, end)
      : moveRows(stand, controller, plant, run, row, end);
    if (row >= rows || Math.abs(target - (measured[row - 1] ?? 0)) > lost) return row;
    advanceToRow(plant, row, output);
  }
}

/**
 * Ticks from row `start`, whose reading the plant stands at, to the last before something happens, or to `end`.
 *
 * @returns the row after the last written; the plant stands at the last's reading
 */
function moveRows(
  stand: TrialStand,
  controller: Controller,
  plant: SwiftPlant,
  run: SwiftRun,
  start: number,
  end: number,
): number {
  const { measured, output, noise, counts } = stand;
  const { kp, hold, low, high, halfTurn } = controller;
  const { motion, isSpeed, wholeTicks } = plant;
  const { target, zone, kiTick, mostI, iOutside, kdTick, dKeep, readingShare } = run;
  const way = motion.speed > 0 ? plant.forward : plant.back;
  const { midKeep, midGain, midLoss, keep, olderGain, gain, loss, coast, olderTravel, travel, travelLoss, stop } = way;
  // Before two outputs have arrived, and on a supply that sags or is limited, every interval is left to `strideRigid`.
  const most = plant.isPlain > 0 && start > wholeTicks ? end : start + 1;
  const until = Math.min(most, output.length, measured.length) | 0;
  let older = start > wholeTicks ? (output[start - wholeTicks - 1] ?? 0) : 0;
  let x = motion.position;
  let v = motion.speed;
  let { i, d, previous } = run;
  let row = start | 0;
  for (;;) {
    let reading = isSpeed > 0 ? v : x;
    if (noise !== null) reading += noise[row] ?? 0;
    if (counts > 0) reading = quantise(reading, counts);

    let error = target - reading;
    if (Math.abs(error) > halfTurn) error = wrapError(error, 2 * halfTurn);
    const point = readingShare > 0 ? -reading : error;
    if (row > 0) {
      if (Math.abs(error) < zone) {
        i += kiTick * error;
        if (Math.abs(i) > mostI) i = i > 0 ? mostI : -mostI;
      } else i *= iOutside;
      d = kdTick * (point - previous) + dKeep * d;
    }
    previous = point;
    let sent = kp * error + (i + d) + hold;
    if (sent > high) sent = high;
    else if (sent < low) sent = low;
    measured[row] = reading;
    output[row] = sent;

    row++;
    if (row >= until) break;
    const newer = wholeTicks === 0 ? sent : (output[row - 1 - wholeTicks] ?? 0);
    let nextSpeed = keep * v + (gain * newer - loss);
    let nextPosition = x + coast * v + (travel * newer - travelLoss);
    if (midGain > 0) {
      if (!((midKeep * v + (midGain * older - midLoss)) * v > 0)) break;
      nextSpeed += olderGain * older;
      nextPosition += olderTravel * older;
      older = newer;
    }
    if (!(nextSpeed * v > 0 && (stop - nextPosition) * v > 0)) break;
    x = nextPosition;
    v = nextSpeed;
  }
  motion.position = x;
  motion.speed = v;
  run.i = i;
  run.d = d;
  run.previous = previous;
  return row;
}

/**
 * The same while the mechanism rests and the reading stands still: the integral and a filtered derivative go on, and once the
 * derivative is nil the output is a straight line, written down as far as it surely keeps the mechanism at rest.
 */
function restRows(
  stand: TrialStand,
  controller: Controller,
  plant: SwiftPlant,
  run: SwiftRun,
  start: number,
  end: number,
): number {
  const { measured, output, counts } = stand;
  const { kp, hold, low, high, halfTurn } = controller;
  const { motion, isSpeed, wholeTicks, perUnit, isPlain } = plant;
  const { target, zone, kiTick, mostI, iOutside, kdTick, dKeep, readingShare } = run;
  const { startForward, startBack } = motion.law;
  let reading = isSpeed > 0 ? 0 : motion.position;
  if (counts > 0) reading = quantise(reading, counts);
  let error = target - reading;
  if (Math.abs(error) > halfTurn) error = wrapError(error, 2 * halfTurn);
  const point = readingShare > 0 ? -reading : error;
  const iTick = Math.abs(error) < zone ? kiTick * error : 0;
  const iKeep = Math.abs(error) < zone ? 1 : iOutside;
  const steady = kp * error + hold;

  let { i, d, previous } = run;
  let quiet = 0;
  let row = start | 0;
  for (;;) {
    if (row > 0) {
      i = i * iKeep + iTick;
      if (Math.abs(i) > mostI) i = i > 0 ? mostI : -mostI;
      d = kdTick * (point - previous) + dKeep * d;
    }
    previous = point;
    let sent = steady + (i + d);
    if (sent > high) sent = high;
    else if (sent < low) sent = low;
    measured[row] = reading;
    output[row] = sent;
    row++;

    const latest = row - 1 - wholeTicks;
    const force = latest < 0 ? startBack : stallForce(motion.law, (output[latest] ?? 0) * perUnit);
    if (row >= end || force > startForward || force < startBack) break;
    // Every output on its way keeps it at rest once this many in a row do.
    const u = sent * perUnit;
    quiet = u > startForward || u < startBack ? 0 : quiet + 1;
    if (d === 0 && isPlain > 0 && quiet > wholeTicks) {
      const room =
        iTick > 0 ? Math.min(startForward / perUnit, high) - sent : sent - Math.max(startBack / perUnit, low);
      const iRoom = mostI >= 0 ? mostI - Math.abs(i) : Number.POSITIVE_INFINITY;
      const ticks = Math.min(end - row, Math.floor(Math.min(room, iRoom) / Math.abs(iTick)) - 1);
      for (let tick = 1; tick <= ticks; tick++) {
        measured[row] = reading;
        output[row] = sent + tick * iTick;
        row++;
      }
      if (ticks > 0) i += ticks * iTick;
      if (row >= end) break;
    }
  }
  run.i = i;
  run.d = d;
  run.previous = previous;
  return row;
}
