import { fullOutput } from '../../controller/settings.ts';
import { formatNumber } from '../../mechanism/quantity.ts';
import { amount, breakawayOf, output, type Rule, seconds, verdict } from './look.ts';

/** Settled within the target's time. */
export const settled: Rule = (look) => {
  const { settlingTime } = look.figures;
  const { target } = look.profile;
  if (settlingTime === null || settlingTime > target.settlingTime) return null;
  return verdict(
    'settled',
    `Settled within ${amount(look, target.tolerance)} after ${seconds(settlingTime)}; the target is ${seconds(target.settlingTime)}.`,
    'settling time is no more than the target',
    { settlingTime, target: target.settlingTime },
  );
};

/** Settles, or is on its way, but later than the target. */
export const slow: Rule = (look) => {
  const { settlingTime, overshoot } = look.figures;
  const { target } = look.profile;
  if (settlingTime !== null && settlingTime > target.settlingTime && overshoot <= Math.max(target.overshoot, 1)) {
    return verdict(
      'slow',
      `Settled after ${seconds(settlingTime)}, ${seconds(settlingTime - target.settlingTime)} later than the target allows, without running past it.`,
      'settling time is above the target and the overshoot is within it',
      { settlingTime, target: target.settlingTime, overshoot },
    );
  }
  const { error, time } = look.course;
  const last = error.length - 1;
  const fifth = Math.floor(0.8 * last);
  const end = Math.abs(error[last] ?? 0);
  const before = Math.abs(error[fifth] ?? 0);
  const moving = before - end > Math.max(2 * (look.profile.sensor?.resolution ?? 0), 0.2 * target.tolerance);
  if (settlingTime !== null || overshoot > Math.max(target.overshoot, 1) || !moving || end <= target.tolerance)
    return null;
  return verdict(
    'slow',
    `Still ${amount(look, end)} away and closing when the record ends at ${seconds(time[last] ?? 0)}.`,
    'the error still falls over the last fifth of the record and is outside the tolerance at its end',
    { end, before },
    [look.course.rows[fifth] ?? 0, look.course.rows[last] ?? 0],
  );
};

/** Rests outside the tolerance. */
export const stuckShort: Rule = (look) => {
  const rest = look.figures.restingError;
  const { tolerance } = look.profile.target;
  if (rest === null || Math.abs(rest) <= tolerance) return null;
  const full = fullOutput(look.profile.controller);
  const at = look.samples.output?.at(-1) ?? null;
  const side = Math.sign(rest) === Math.sign(look.move.to - look.move.from) ? 'short' : 'past the target';
  const speed = look.profile.quantity === 'speed';
  const start = breakawayOf(look) * full;
  const because =
    at === null
      ? `${speed ? 'Holds' : 'Rests'} ${amount(look, Math.abs(rest))} ${side}.`
      : speed
        ? `Holds ${amount(look, Math.abs(rest))} ${side}: ${output(look, at)} is all that this error asks for.`
        : `Rests ${amount(look, Math.abs(rest))} ${side}: ${output(look, at)} at rest is under the ${formatNumber(start, 2)} that this mechanism needs to start moving.`;
  return verdict(
    'stuck-short',
    because,
    'speed is nil over the last fifth of the record and the mean error there is outside the tolerance',
    { restingError: rest, tolerance, ...(at === null ? {} : { outputAtRest: at, startsAt: start }) },
  );
};

/** Runs past the target by more than it allows. */
export const overshoots: Rule = (look) => {
  const { overshoot, peakTime } = look.figures;
  const allowed = look.profile.target.overshoot;
  const size = Math.abs(look.move.to - look.move.from);
  const past = (overshoot / 100) * size;
  const seen = past > 1.01 * (look.profile.sensor?.resolution ?? 0);
  if (overshoot <= allowed || !seen) return null;
  return verdict(
    'overshoots',
    `Ran ${amount(look, past)} (${formatNumber(overshoot, 2)} %) past the target${peakTime === null ? '' : ` at ${seconds(peakTime)}`}; ${formatNumber(allowed, 2)} % is allowed.`,
    'overshoot is above the target by more than one step of the sensor',
    { overshoot, allowed },
  );
};
