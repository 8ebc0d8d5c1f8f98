import { formatNumber } from '../../mechanism/quantity.ts';
import { swingOf } from '../swing.ts';
import { amount, type Look, type Rule, seconds, verdict } from './look.ts';

/** Turning points about the target, tall enough to matter: above noise and half the tolerance. */
function turnsOf(look: Look) {
  const { sensor, target } = look.profile;
  const size = Math.abs(look.move.to - look.move.from) || 1;
  const least = Math.max(
    2.5 * (sensor?.resolution ?? 0),
    5 * (sensor?.noise ?? 0),
    0.5 * target.tolerance,
    0.005 * size,
  );
  return { ...swingOf(look.course.time, look.course.progress, 1, least / size), size };
}

const GROWS = 1.05;
const STEADY = 0.85;

/** One rule for the three kinds of swing, told apart by how same-side extremes follow each other. */
export const swinging: Rule = (look) => {
  const { turns, ratio, period, size } = turnsOf(look);
  if (turns.length < 3 || ratio === null || period === null) return null;
  const last = turns.at(-1);
  const first = turns[0];
  if (!last || !first) return null;
  const height = Math.abs(last.height) * size;
  const end = look.course.time.at(-1) ?? 0;
  const goesOn = end - last.time < 1.2 * period;
  const numbers = { ratio, period, turns: turns.length, height };
  const range = [look.course.rows[first.row] ?? 0, look.course.rows[last.row] ?? 0] as const;
  const wide = Math.abs(last.height) >= Math.abs(first.height);
  if (goesOn && turns.length >= 3 && ratio > GROWS && wide) {
    return verdict(
      'growing-swing',
      `Swings wider each time: every ${seconds(period)}, ${formatNumber(ratio, 2)} times as far as the time before, ${amount(look, height)} at the end.`,
      `same-side extremes grow by more than ${GROWS} and the swing is still going on`,
      numbers,
      range,
    );
  }
  if (goesOn && turns.length >= 4 && ratio >= STEADY) {
    const full = look.figures.saturated > 0.5 && height > 0.1 * size;
    return verdict(
      full ? 'growing-swing' : 'steady-swing',
      full
        ? `Swings ${amount(look, height)} each way every ${seconds(period)} and only the output's limit keeps it from growing.`
        : `Goes on swinging ${amount(look, height)} each way every ${seconds(period)} without dying out.`,
      full
        ? 'same-side extremes do not shrink and the output is at its limit for more than half of the time'
        : `same-side extremes stay within ${STEADY} to ${GROWS} of the one before`,
      { ...numbers, saturated: look.figures.saturated },
      range,
    );
  }
  return verdict(
    'swings',
    `Swings about the target every ${seconds(period)}, each time ${formatNumber(ratio, 2)} as far as before: it dies out.`,
    'three or more turning points about the target, shrinking',
    numbers,
    range,
  );
};

/** Stick-slip under integral: long flats on one side, a jump, a flat on the other. */
export const hunting: Rule = (look) => {
  if (look.gains !== null && look.gains.ki === 0) return null;
  if (look.gains === null && look.samples.parts === null) return null;
  const flats = flatsOf(look);
  if (flats.length < 3) return null;
  const sides = flats.map((flat) => Math.sign(flat.error));
  const changes = sides.filter((side, k) => k > 0 && side !== sides[k - 1] && side !== 0).length;
  if (changes < 2) return null;
  const worst = Math.max(...flats.map((flat) => Math.abs(flat.error)));
  if (worst <= look.profile.target.tolerance) return null;
  const first = flats[0];
  const last = flats.at(-1);
  if (!first || !last) return null;
  const period = (2 * (last.start - first.start)) / (flats.length - 1);
  return verdict(
    'hunting',
    `Hunts: it sticks, the sum builds up, it slips past the target and sticks again, up to ${amount(look, worst)} off, about every ${seconds(period)}.`,
    'three or more rests on alternate sides of the target, with a slip between each',
    { rests: flats.length, worst, period },
    [first.row, last.row],
  );
};

interface Flat {
  readonly start: number;
  readonly error: number;
  readonly row: number;
}

/** Stretches at rest of a quarter of a second or more, after the first arrival near the target. */
function flatsOf(look: Look): readonly Flat[] {
  const { time, error, progress, rows } = look.course;
  const still = Math.max(1.01 * (look.profile.sensor?.resolution ?? 0), 0.05 * look.profile.target.tolerance);
  const flats: Flat[] = [];
  let begin = progress.findIndex((share) => share > 0.7);
  if (begin < 0) return flats;
  for (let row = begin + 1; row <= time.length; row++) {
    const ended = row === time.length || Math.abs((error[row] ?? 0) - (error[begin] ?? 0)) > still;
    if (!ended) continue;
    if ((time[row - 1] ?? 0) - (time[begin] ?? 0) >= 0.25) {
      flats.push({ start: time[begin] ?? 0, error: error[begin] ?? 0, row: rows[begin] ?? 0 });
    }
    begin = row;
  }
  return flats;
}
