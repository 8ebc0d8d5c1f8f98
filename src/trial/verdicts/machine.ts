import { formatNumber } from '../../mechanism/quantity.ts';
import { leastTime } from '../least-time.ts';
import { amount, fractions, output, type Rule, seconds, verdict } from './look.ts';

/** Ran into the end of its travel. */
export const hitAStop: Rule = (look) => {
  const { profile, move } = look;
  if (profile.quantity !== 'position') return null;
  const { measured, time } = look.samples;
  const near = Math.max(2 * (profile.sensor?.resolution ?? 0), 0.1 * profile.target.tolerance);
  const topSpeed =
    (look.response ?? look.nameplate)?.topSpeed ?? Math.abs(move.to - move.from) / profile.target.settlingTime;
  for (let row = 2; row < measured.length; row++) {
    const at = measured[row] ?? 0;
    const limit = reached(at, profile.limits.min, profile.limits.max, near);
    if (limit === null || Math.abs(limit - move.to) <= profile.target.tolerance) continue;
    if (Math.abs(limit - move.from) <= profile.target.tolerance && Math.abs(at - (measured[0] ?? 0)) <= near) continue;
    const dt = (time[row] ?? 0) - (time[row - 2] ?? 0);
    const speed = dt > 0 ? Math.abs(at - (measured[row - 2] ?? 0)) / dt : 0;
    if (speed < 0.05 * topSpeed) continue;
    return verdict(
      'hit-a-stop',
      `Reached the end of its travel at ${amount(look, limit)} at ${seconds(time[row] ?? 0)}, still doing ${formatNumber(speed, 2)} ${profile.unit}/s.`,
      'reading at a travel limit, arriving faster than 5 % of top speed',
      { limit, speed },
      [row - 2, row],
    );
  }
  return null;
};

function reached(at: number, min: number | null, max: number | null, near: number): number | null {
  if (max !== null && at >= max - near) return max;
  return min !== null && at <= min + near ? min : null;
}

/** Up and down differ. */
export const oneSided: Rule = (look) => {
  const { response } = look;
  if (response === null) return null;
  const { drag, dragBack } = response;
  const ratio = Math.max(drag, dragBack) / Math.max(1e-9, Math.min(drag, dragBack));
  if (ratio < 1.6 || Math.abs(drag - dragBack) < 0.02) return null;
  const harder = drag > dragBack ? 'forward' : 'back';
  return verdict(
    'one-sided',
    `It goes harder ${harder}: ${formatNumber(Math.max(drag, dragBack), 2)} of full output against ${formatNumber(Math.min(drag, dragBack), 2)} the other way.`,
    'learnt drag of the two directions differs by more than 1.6 times and 0.02',
    { drag, dragBack },
  );
};

/** Lost motion: the output turns, and the reading waits. */
export const loose: Rule = (look) => {
  const gap = look.profile.drive?.backlash ?? null;
  const sent = fractions(look);
  if (gap === null || gap <= 0 || sent === null) return null;
  const { measured } = look.samples;
  const { time } = look.samples;
  const half = Math.floor(measured.length / 2);
  let low = Number.POSITIVE_INFINITY;
  let high = Number.NEGATIVE_INFINITY;
  let turns = 0;
  for (let row = half; row < measured.length; row++) {
    low = Math.min(low, measured[row] ?? 0);
    high = Math.max(high, measured[row] ?? 0);
    if (Math.sign(sent[row] ?? 0) === -Math.sign(sent[row - 1] ?? 0)) turns++;
  }
  const span = (time.at(-1) ?? 0) - (time[half] ?? 0);
  const swing = high - low;
  const least = Math.max(3 * (look.profile.sensor?.resolution ?? 0), 0.2 * gap);
  if (turns < 4 || span <= 0 || swing < least || swing > 2.5 * gap) return null;
  return verdict(
    'loose',
    `It rocks over ${amount(look, swing)} at the end, about its lost motion of ${amount(look, gap)}: the output turned ${turns} times without coming to rest.`,
    'swing over the second half is no more than 2.5 times the lost motion while the output turns four times or more',
    { swing, gap, turns },
    [half, measured.length - 1],
  );
};

/** No gains could meet the target: full output all the way would be too slow. */
export const outOfReach: Rule = (look) => {
  if (look.reach === null) return null;
  const { target, limits } = look.profile;
  const late: { readonly least: number; readonly from: number; readonly to: number }[] = [];
  for (const [from, to] of target.moves) {
    const least = leastTime(look.reach, look.profile, { from, to }, limits.outputCap);
    if (least > 1.03 * target.settlingTime) late.push({ least, from, to });
  }
  const worst = late.sort((a, b) => b.least - a.least)[0];
  if (worst === undefined) return null;
  const because = Number.isFinite(worst.least)
    ? `${amount(look, worst.from)} to ${amount(look, worst.to)} takes at least ${seconds(worst.least)} with full output all the way, braking included; the target is ${seconds(target.settlingTime)}.`
    : `${amount(look, worst.from)} to ${amount(look, worst.to)} cannot be made at all: ${output(look, limits.outputCap)} of full is not enough against its drag and weight.`;
  return verdict(
    'out-of-reach',
    because,
    'the time at full output there and full braking, at the optimistic end of what is learnt, is above the target',
    { least: worst.least, target: target.settlingTime },
  );
};

/** The trial did not keep its promise. */
export const outOfBand: Rule = (look) => {
  if (look.promise === null || look.promise.inside) return null;
  const { share, first } = look.promise;
  const at = look.samples.time[first ?? 0] ?? 0;
  return verdict(
    'out-of-band',
    `Left the band it was promised at ${seconds(at)} and was inside for only ${formatNumber(100 * share, 2)} % of the record: the machine is not the one learnt so far.`,
    'outside the 90 % band for more than a fifth of the record, or by more than its width',
    { share },
    first === null ? null : [first, look.samples.time.length - 1],
  );
};
