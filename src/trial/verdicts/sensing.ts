import { fullOutput } from '../../controller/settings.ts';
import { wrapError } from '../../controller/tick.ts';
import { plantWith } from '../../mechanism/plant-of.ts';
import { formatNumber } from '../../mechanism/quantity.ts';
import { unitScale } from '../../mechanism/units.ts';
import { respond } from '../../plant/respond.ts';
import {
  amount,
  breakawayOf,
  fractions,
  holdOf,
  type Look,
  noticeable,
  output,
  type Rule,
  seconds,
  verdict,
} from './look.ts';

/**
 * Moves against its output. What starts it and carries it is taken from the nameplate or a cautious guess, never from what was
 * learnt: a reversed machine teaches nonsense.
 */
export const reversed: Rule = (look) => {
  const sent = fractions(look);
  if (sent === null || (look.profile.quantity === 'speed' && look.move.from !== 0)) return null;
  const { measured, time } = look.samples;
  const first = measured[0] ?? 0;
  const least = Math.max(noticeable(look), 0.03 * Math.abs(look.move.to - look.move.from));
  const needed = unlearntNeed(look);
  const way = (row: number) => wrapError((measured[row] ?? 0) - first, look.profile.continuous);
  const clear = measured.findIndex((_, row) => Math.abs(way(row)) >= least);
  if (clear < 1) return null;
  const gone = Math.sign(way(clear));
  // Up to the first clear motion, and on until it has gone twice as far, it was pushed the other way.
  let end = clear;
  while (end + 1 < measured.length && Math.abs(way(end)) < 2 * least) end++;
  for (let row = 0; row <= end; row++) {
    const push = sent[row] ?? 0;
    if (Math.sign(push) === gone || (row < clear && Math.abs(push) < needed)) return null;
  }
  const push = sent[Math.max(0, clear - 1)] ?? 0;
  return verdict(
    'reversed',
    `Pushed with ${output(look, push * fullOutput(look.profile.controller))}, it moved ${amount(look, Math.abs(way(clear)))} the other way by ${seconds(time[clear] ?? 0)}: the sign of the output or of the sensor is reversed.`,
    'from the start to well after the first clear motion, it goes against an output above breakaway and weight',
    { output: push, moved: way(clear) },
    [0, clear],
  );
};

/** Output that starts and carries it, by the nameplate or a guess. */
function unlearntNeed(look: Look): number {
  const plain = { ...look, response: null };
  return breakawayOf(plain) + holdOf(plain);
}

/** Output without motion: the motor does not act, or the sensor does not see it. */
export const deaf: Rule = (look) => {
  const sent = fractions(look);
  if (sent === null) return null;
  const { measured, time } = look.samples;
  const first = measured[0] ?? 0;
  const moved = measured.reduce((far, value) => Math.max(far, Math.abs(value - first)), 0);
  if (moved >= noticeable(look)) return null;
  const plain = { ...look, response: null };
  const needed = Math.max(0.12, 1.6 * breakawayOf(plain)) + holdOf(plain);
  let long = 0;
  let strongest = 0;
  for (let row = 0; row + 1 < time.length; row++) {
    const push = Math.abs(sent[row] ?? 0);
    if (push >= needed) long += (time[row + 1] ?? 0) - (time[row] ?? 0);
    strongest = Math.max(strongest, push);
  }
  if (long < 0.25) return null;
  const noisy = (look.profile.sensor?.noise ?? 0) > 0 && measured.every((value) => value === first);
  const full = fullOutput(look.profile.controller);
  return verdict(
    noisy ? 'frozen' : 'deaf',
    noisy
      ? `The reading stayed at ${amount(look, first)} to the last digit for the whole record while up to ${output(look, strongest * full)} was sent; a live sensor would show its noise.`
      : `Up to ${output(look, strongest * full)} was sent and the reading stayed at ${amount(look, first)}: either nothing moved, or the sensor did not see it.`,
    'output well above breakaway and weight for a quarter of a second or more, reading within its noise',
    { strongest, seconds: long, moved },
  );
};

/** The reading stops dead in mid-motion while the output goes on. */
export const frozen: Rule = (look) => {
  const sent = fractions(look);
  if (sent === null) return null;
  const { measured, time } = look.samples;
  const { min, max } = look.profile.limits;
  const step = Math.max(look.profile.sensor?.resolution ?? 0, 1e-12);
  const least = 0.2 * Math.abs(look.move.to - look.move.from);
  for (let row = 3; row < measured.length; row++) {
    if (measured[row] !== measured[row - 1]) continue;
    let end = row;
    while (end + 1 < measured.length && measured[end + 1] === measured[row]) end++;
    const flat = (time[end] ?? 0) - (time[row - 1] ?? 0);
    const before = (measured[row - 1] ?? 0) - (measured[row - 3] ?? 0);
    const at = measured[row] ?? 0;
    const away = Math.abs(wrapError((look.samples.setpoint[row] ?? 0) - at, look.profile.continuous));
    const pushing = meanSize(sent, row, end) > Math.max(0.3, 1.5 * breakawayOf(look) + holdOf(look));
    const byStop = (min !== null && at - min < 0.02 * away) || (max !== null && max - at < 0.02 * away);
    const fast = look.profile.quantity === 'speed' ? Math.abs(at) > 8 * step : Math.abs(before) > 8 * step;
    if (flat >= 0.3 && fast && pushing && !byStop && away > least && look.profile.quantity === 'position') {
      return verdict(
        'frozen',
        `The reading stopped dead at ${amount(look, at)} at ${seconds(time[row - 1] ?? 0)}, in mid-motion, and stayed there for ${seconds(flat)} while the output went on pushing.`,
        'reading the same to the last digit for 0.3 s or more, straight from motion, with output above breakaway',
        { at, seconds: flat },
        [row - 1, end],
      );
    }
    row = end;
  }
  return null;
};

function meanSize(values: Float64Array, first: number, last: number): number {
  let sum = 0;
  for (let row = first; row <= last; row++) sum += Math.abs(values[row] ?? 0);
  return sum / (last - first + 1);
}

/** Steps of the reading that no motor could make. */
export const jumps: Rule = (look) => {
  const { measured, time } = look.samples;
  const known = look.nameplate ?? look.response;
  const size = Math.abs(look.move.to - look.move.from);
  const rows: number[] = [];
  let worst = 0;
  for (let k = 1; k < look.course.rows.length; k++) {
    const row = look.course.rows[k] ?? 0;
    const previous = look.course.rows[k - 1] ?? 0;
    const change = Math.abs(wrapError((measured[row] ?? 0) - (measured[previous] ?? 0), look.profile.continuous));
    const dt = Math.max((time[row] ?? 0) - (time[previous] ?? 0), 0.2 * look.profile.controller.period);
    const possible =
      look.profile.quantity === 'position' ? possibleStep(known, dt, look) : possibleSpeedStep(known, dt, look);
    if (change > Math.max(possible, 0.12 * size, 2 * noticeable(look))) {
      rows.push(row);
      worst = Math.max(worst, change);
    }
  }
  const glitches = look.course.glitches.length;
  if (rows.length === 0 && glitches < 3) return null;
  const first = rows[0] ?? look.course.glitches[0] ?? 0;
  return verdict(
    'jumps',
    rows.length > 0
      ? `The reading jumped by ${amount(look, worst)} from one sample to the next at ${seconds(time[first] ?? 0)}: no motor moves it that fast.`
      : `${glitches} single samples stand far off from their neighbours, the first at ${seconds(time[first] ?? 0)}.`,
    'a step from sample to sample beyond three times the top speed, or three or more glitches',
    { jumps: rows.length, glitches, worst },
    [Math.max(0, first - 1), first],
  );
};

function possibleStep(known: Look['response'], dt: number, look: Look): number {
  // Unknown machine: no sane mechanism makes a fifth of its move in one tick and rests before and after.
  return known === null ? 0.3 * Math.abs(look.move.to - look.move.from) : 3 * known.topSpeed * dt;
}

function possibleSpeedStep(known: Look['response'], dt: number, look: Look): number {
  // A light wheel read thirty times a second makes most of its move between two samples: only more than the move is a jump.
  if (known === null) return 1.5 * Math.abs(look.move.to - look.move.from);
  return 4 * known.topSpeed * Math.min(1, dt / known.lag) + 0.15 * known.topSpeed;
}

interface UnitRatio {
  readonly ratio: number;
  readonly words: string;
  readonly of: 'length' | 'angle' | 'any';
}

/** Ratios that a mixed-up unit leaves, with the words for it. */
const UNIT_RATIOS: readonly UnitRatio[] = [
  { ratio: 25.4, words: 'millimetres for inches', of: 'length' },
  { ratio: 2.54, words: 'centimetres for inches', of: 'length' },
  { ratio: 39.37, words: 'inches for metres', of: 'length' },
  { ratio: 3.281, words: 'feet for metres', of: 'length' },
  { ratio: 12, words: 'inches for feet', of: 'length' },
  { ratio: 1000, words: 'millimetres for metres', of: 'length' },
  { ratio: 57.2958, words: 'degrees for radians', of: 'angle' },
  { ratio: 6.28319, words: 'radians for turns', of: 'angle' },
  { ratio: 360, words: 'degrees for turns', of: 'angle' },
  { ratio: 60, words: 'per minute for per second', of: 'angle' },
  { ratio: 9.5493, words: 'rpm for rad/s', of: 'angle' },
  { ratio: 10, words: 'a factor of ten', of: 'any' },
  { ratio: 100, words: 'a factor of a hundred', of: 'any' },
  { ratio: 1024, words: 'raw ticks of the sensor', of: 'any' },
  { ratio: 2048, words: 'raw ticks of the sensor', of: 'any' },
  { ratio: 4096, words: 'raw ticks of the sensor', of: 'any' },
  { ratio: 8192, words: 'raw ticks of the sensor', of: 'any' },
];

/** The reading moves by another scale than the nameplate says it can. */
export const wrongScale: Rule = (look) => {
  const ratio = scaleRatio(look);
  if (ratio === null) return null;
  const size = Math.abs(Math.log(ratio));
  // A nameplate wrong by 30 %, friction and load together stay well under this.
  if (size < Math.log(2.2)) return null;
  const { dimension } = unitScale(look.profile.unit);
  const match = UNIT_RATIOS.find(
    (known) => (known.of === 'any' || known.of === dimension) && Math.abs(size - Math.log(known.ratio)) < 0.22,
  );
  if (match === undefined && size < Math.log(4)) return null;
  const times = ratio > 1 ? `${formatNumber(ratio, 2)} times as far` : `only 1/${formatNumber(1 / ratio, 2)} as far`;
  const likely =
    match === undefined
      ? 'That is no unit ratio; check reduction, radius and the sensor’s conversion.'
      : `That looks like ${match.words}${ratio > 1 ? '' : ', the other way round'}.`;
  return verdict(
    'wrong-scale',
    `The reading moved ${times} as the nameplate says this output can move it. ${likely}`,
    'motion over the motion that the nameplate gives for the same output is beyond 2.2, or under 1/2.2',
    { ratio },
  );
};

/** Measured motion over that of the nameplate under the same output; null when there is too little of either. */
function scaleRatio(look: Look): number | null {
  const sent = fractions(look);
  if (look.nameplate === null) return null;
  // A usable model has drag told apart from speed: better than motion over expected motion.
  if (look.response !== null) return look.response.topSpeed / look.nameplate.topSpeed;
  if (sent === null || !drivenHard(sent, look)) return null;
  const { time, measured } = look.samples;
  const plant = {
    ...plantWith(look.profile, { ...look.nameplate, dragBack: look.nameplate.drag }),
    coupling: null,
    stops: { min: null, max: null },
  };
  const speedLoop = look.profile.quantity === 'speed';
  const answer = respond(
    plant,
    speedLoop ? { position: 0, speed: look.move.from } : { position: look.move.from, speed: 0 },
    time,
    sent,
  );
  const rows = firstDrive(sent);
  let own = 0;
  let both = 0;
  let farthest = 0;
  let expected = 0;
  for (let row = 0; row < rows; row++) {
    const x = (answer[row] ?? 0) - look.move.from;
    const y = wrapError((measured[row] ?? 0) - (measured[0] ?? 0), look.profile.continuous);
    own += x * x;
    both += x * y;
    farthest = Math.max(farthest, Math.abs(y));
    expected = Math.max(expected, Math.abs(x));
  }
  if (farthest < noticeable(look) || expected < 2 * noticeable(look) * 1e-3 || own === 0 || both <= 0) return null;
  return both / own;
}

/** Was it driven so hard that drag the nameplate misjudges cannot pass for a scale? */
function drivenHard(sent: Float64Array, look: Look): boolean {
  const peak = sent.reduce((most, value) => Math.max(most, Math.abs(value)), 0);
  return peak - holdOf(look) >= Math.max(0.15, 3 * breakawayOf(look));
}

/** Rows until the output first turns or fades: there drag and weight matter least. */
function firstDrive(sent: Float64Array): number {
  const peak = sent.reduce((most, value) => Math.max(most, Math.abs(value)), 0);
  const way = Math.sign(sent.find((value) => Math.abs(value) > 0.3 * peak) ?? 0);
  const start = sent.findIndex((value) => Math.abs(value) > 0.3 * peak);
  let row = Math.max(0, start);
  while (row < sent.length && Math.sign(sent[row] ?? 0) === way && Math.abs(sent[row] ?? 0) > 0.3 * peak) row++;
  return Math.min(sent.length, Math.max(row + 1, 6));
}
