import { fullOutput } from '../../controller/settings.ts';
import { formatNumber } from '../../mechanism/quantity.ts';
import { amount, output, type Rule, seconds, verdict } from './look.ts';

/** Output at its limit for most of the way: the motor decides, not the gains. */
export const saturated: Rule = (look) => {
  const { saturated: share } = look.figures;
  if (look.samples.output === null || share <= 0.5) return null;
  return verdict(
    'saturated',
    `Output was at its limit for ${formatNumber(100 * share, 2)} % of the way: there the motor sets the pace, not the gains.`,
    'output at its limit for more than half of the time to settling',
    { share },
  );
};

/** Reversals a second that are plain chatter at any loop rate. */
const MOST_REVERSALS = 8;

/** The derivative answers the sensor's steps or noise. */
export const chatters: Rule = (look) => {
  const { chatter } = look.figures;
  if (chatter === null || chatter <= MOST_REVERSALS) return null;
  const { gains, profile } = look;
  const step = Math.max(profile.sensor?.resolution ?? 0, profile.sensor?.noise ?? 0);
  const answer = ((gains?.kd ?? 0) * step) / (profile.controller.period + profile.controller.derivativeFilter);
  const why =
    answer > 0 ? ` One step of the sensor, ${amount(look, step)}, makes ${output(look, answer)} through Kd.` : '';
  return verdict(
    'chatters',
    `The output turns round ${formatNumber(chatter, 2)} times a second.${why}`,
    `more than ${MOST_REVERSALS} reversals a second, each above 2 % of full output`,
    { chatter, answerToOneStep: answer },
  );
};

/** The sum gathered on the way carries it past the target. */
export const woundUp: Rule = (look) => {
  const integral = look.samples.parts?.i ?? null;
  if (integral === null || look.gains?.ki === 0) return null;
  const crossing = look.course.progress.findIndex((share) => share >= 1);
  if (crossing < 0 || look.figures.overshoot <= look.profile.target.overshoot) return null;
  const row = look.course.rows[crossing] ?? 0;
  const then = integral[row] ?? 0;
  const needed = integral.at(-1) ?? 0;
  const full = fullOutput(look.profile.controller);
  const onward = Math.sign(then) === Math.sign(look.move.to - look.move.from);
  const surplus = Math.abs(then - needed);
  if (!onward || surplus < 0.15 * look.outputCap * full) return null;
  return verdict(
    'wound-up',
    `The sum was at ${output(look, then)} when it reached the target, where ${formatNumber(needed, 2)} is all it needed in the end: it gathered on the way and pushed past.`,
    'integral part at the first crossing exceeds its final value by 15 % of the output allowed, with overshoot',
    { atCrossing: then, atEnd: needed },
    [row, row],
  );
};

/** The supply gives way under the load. */
export const sagging: Rule = (look) => {
  const { supply, time } = look.samples;
  if (supply === null || supply.length === 0) return null;
  let low = Number.POSITIVE_INFINITY;
  let high = 0;
  let at = 0;
  supply.forEach((volts, row) => {
    if (volts < low) {
      low = volts;
      at = row;
    }
    high = Math.max(high, volts);
  });
  const open = Math.max(high, look.profile.supply?.openCircuit ?? 0);
  if (!(low < 0.78 * open)) return null;
  return verdict(
    'sagging',
    `The supply fell from ${formatNumber(open, 3)} V to ${formatNumber(low, 3)} V at ${seconds(time[at] ?? 0)}: the same output is worth ${formatNumber((100 * low) / open, 2)} % there.`,
    'lowest supply under 78 % of the open-circuit voltage',
    { low, open },
    [at, at],
  );
};
