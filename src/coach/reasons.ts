import { fullOutput, type Gains } from '../controller/settings.ts';
import type { LearntModel, Prior } from '../learn/learnt.ts';
import type { Move, Profile } from '../mechanism/profile.ts';
import { formatNumber, formatQuantity } from '../mechanism/quantity.ts';
import { straightMove } from '../trial/course.ts';
import type { FirstTrial } from './ready.ts';
import type { ExpectedFigures, TrialReading, TrialRecord } from './step.ts';

/** Words for proposals: every one names the machine's own numbers. Output is shown in the controller's unit. */

const OUTPUT_WORD = { fraction: '', percent: ' %', volts: ' V' } as const;

/** An output, given as a fraction of full, in the controller's unit. */
export function outputText(fraction: number, profile: Profile): string {
  const { unit } = profile.controller.output;
  return `${formatNumber(fraction * fullOutput(profile.controller), 3)}${OUTPUT_WORD[unit]}`;
}

/** A length, angle or speed of this mechanism, to the digits that its sensor can tell. */
export function amount(value: number, profile: Profile): string {
  return formatQuantity(value, profile.unit, profile.sensor?.resolution ?? 0);
}

function moveText(move: Move, profile: Profile): string {
  return `${amount(move.from, profile)} to ${amount(move.to, profile)}`;
}

const seconds = (value: number) => `${formatNumber(value, 2)} s`;

/** Why the first trial is as it is. */
export function readyWhy(profile: Profile, first: FirstTrial, known: boolean, attempt: number): string {
  const cap = outputText(first.outputCap, profile);
  const asked = outputText(
    Math.min(
      first.outputCap,
      (first.gains.kp * Math.abs(first.move.to - first.move.from)) / fullOutput(profile.controller),
    ),
    profile,
  );
  const basis = known
    ? 'The nameplate gives the size of the gain.'
    : 'Nothing is known of the machine yet, so the gain asks for the cap at the start of the move and less from there on.';
  const again =
    attempt > 0
      ? 'Last time it did not move far enough to tell anything; this time with half as much output again. '
      : '';
  const hold =
    first.gains.hold === 0
      ? ''
      : ` ${outputText(first.gains.hold / fullOutput(profile.controller), profile)} of it carries the weight.`;
  return `${again}Direction check: a short move with at most ${cap} output, starting with ${asked}.${hold} ${basis} It shows sign, scale, how it gathers speed and where friction stops it.`;
}

/** Why a P-only gain. */
export function proportionalWhy(profile: Profile, gains: Gains, learnt: LearntModel, final: boolean): string {
  const full = fullOutput(profile.controller);
  const { response } = learnt;
  if (profile.quantity === 'speed') {
    const carried = outputText((gains.pace * longestReach(profile)) / full, profile);
    return `Pace carries the steady speed: ${carried} of output for ${amount(longestReach(profile), profile)}, learnt from a top speed of ${amount(response.topSpeed, profile)}. Kp ${formatNumber(gains.kp, 3)} adds ${outputText((gains.kp * longestReach(profile) * 0.1) / full, profile)} for every 10 % it is behind.`;
  }
  const brakes = full / gains.kp;
  const rest = (full * Math.max(response.breakaway, response.breakawayBack)) / gains.kp;
  const saturates =
    brakes < longestReach(profile)
      ? `Full output until ${amount(brakes, profile)} before the target, less from there`
      : `The whole move asks for ${outputText((gains.kp * longestReach(profile)) / full, profile)}`;
  const { tolerance } = profile.target;
  const stiff = `it could not start again from within ${amount(rest, profile)} of the target, where Kp asks for less than the ${outputText(response.breakaway, profile)} that starts it`;
  const ending = !final
    ? `It may rest up to ${amount(rest, profile)} short, where Kp no longer asks for the ${outputText(response.breakaway, profile)} that starts it moving.`
    : rest <= tolerance
      ? `P alone should do: it rests within ${amount(rest, profile)} of the target.`
      : `P alone should do: it comes in with just the speed to end inside ${amount(tolerance, profile)}, though ${stiff}.`;
  return `${saturates}. It needs ${seconds(response.lag)} to follow its output. ${ending}`;
}

/** Why an integral and this zone. */
export function integralWhy(
  profile: Profile,
  gains: Gains,
  learnt: LearntModel,
  last: TrialRecord,
  reading: TrialReading,
): string {
  const rest = reading.figures.restingError;
  const full = fullOutput(profile.controller);
  const { breakaway } = learnt.response;
  if (profile.quantity === 'speed') {
    const short = rest === null ? '' : `It settled ${amount(Math.abs(rest), profile)} off. `;
    return `${short}Ki ${formatNumber(gains.ki, 3)} finds the output that the last error needs, in about ${seconds(gains.kp / gains.ki)}.`;
  }
  const error = Math.abs(rest ?? profile.target.tolerance);
  const atRest = (last.gains.kp * error) / full;
  const missing = Math.max(0, breakaway - atRest);
  const time = missing > 0 && error > 0 && gains.ki > 0 ? (missing * full) / (gains.ki * error) : null;
  const short = `It rests ${amount(error, profile)} short: ${outputText(atRest, profile)} output there, and ${outputText(breakaway, profile)} is what starts it.`;
  const adds =
    time === null
      ? ''
      : ` Ki ${formatNumber(gains.ki, 3)} adds the missing ${outputText(missing, profile)} in ${seconds(time)}.`;
  const zone =
    gains.zone === null
      ? ''
      : ` The sum gathers only within ${amount(gains.zone, profile)} of the target, so nothing winds up on the way.`;
  return `${short}${adds}${zone}`;
}

/** Why a derivative, or a joint trim. */
export function derivativeWhy(
  profile: Profile,
  gains: Gains,
  learnt: LearntModel,
  last: TrialRecord,
  reading: TrialReading,
): string {
  const { overshoot, settlingTime } = reading.figures;
  const reach = travelOf(last.move, profile);
  const ran =
    overshoot > profile.target.overshoot
      ? `It ran ${amount((overshoot / 100) * reach, profile)} past the target`
      : settlingTime === null
        ? 'It did not settle'
        : `It took ${seconds(settlingTime)} to settle`;
  const lead = gains.kp > 0 ? gains.kd / gains.kp : 0;
  const brake =
    gains.kd > 0
      ? `Kd ${formatNumber(gains.kd, 3)} starts to brake ${seconds(lead)} ahead, against a lag of ${seconds(learnt.response.lag)}`
      : 'No Kd is needed';
  const change = changeText(last.gains, gains);
  return `${ran}. ${brake}${change}.`;
}

function changeText(before: Gains, after: Gains): string {
  const parts: string[] = [];
  const moved = (a: number, b: number) => Math.abs(b - a) > 0.02 * Math.max(Math.abs(a), Math.abs(b));
  if (moved(before.kp, after.kp))
    parts.push(`Kp goes from ${formatNumber(before.kp, 3)} to ${formatNumber(after.kp, 3)}`);
  if (moved(before.ki, after.ki))
    parts.push(
      after.ki === 0 ? 'Ki is taken out' : `Ki goes from ${formatNumber(before.ki, 3)} to ${formatNumber(after.ki, 3)}`,
    );
  return parts.length === 0 ? '' : `; ${parts.join(', ')} with it`;
}

/** Why a proof trial. */
export function proofWhy(profile: Profile, move: Move, proven: number): string {
  const total = profile.target.moves.length;
  return `These gains have met the target on ${proven} of ${total} moves; ${moveText(move, profile)} is still to be shown. Nothing is changed.`;
}

/** What to expect of a trial, in one sentence. */
export function expectText(profile: Profile, expected: ExpectedFigures | null, move: Move): string {
  if (expected === null) return 'No promise yet: this trial is the first look at the machine.';
  const [, , restHigh] = expected.restingError;
  const [settle, low, high] = expected.settlingTime;
  const reach = travelOf(move, profile);
  const over =
    expected.overshoot[2] > 0.05
      ? `past the target by at most ${amount((expected.overshoot[2] / 100) * reach, profile)}`
      : 'not past the target';
  if (settle === null) return `Expect it to stop up to ${amount(restHigh, profile)} off, ${over}.`;
  const range =
    low !== null && high !== null && high - low > 0.02 ? ` (${formatNumber(low, 2)} to ${formatNumber(high, 2)})` : '';
  return `Expect it settled in ${seconds(settle)}${range}, ${over}.`;
}

/** What would change the coach's mind. */
export function unlessText(prior: Prior, learnt: LearntModel | null, profile: Profile): string {
  const top = learnt?.response.topSpeed ?? prior.response.topSpeed;
  if (learnt === null) {
    return 'If it moves the wrong way, does not move, or the reading jumps: stop there; that comes before any gain.';
  }
  return `A response outside its band would mean the mechanism is not the one learnt so far (top speed ${amount(top, profile)}, lag ${seconds(learnt.response.lag)}): then smaller steps, and a look at what rubs, slips or was entered wrongly.`;
}

function longestReach(profile: Profile): number {
  const ends = profile.target.moves.map(([from, to]) =>
    profile.quantity === 'speed' ? Math.abs(to) : travelOf({ from, to }, profile),
  );
  return Math.max(0, ...ends);
}

/** How far a move goes, the short way round on a wrapping scale. */
function travelOf(move: Move, profile: Profile): number {
  const straight = straightMove(move, profile.continuous);
  return Math.abs(straight.to - straight.from);
}
