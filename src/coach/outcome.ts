import type { Gains } from '../controller/settings.ts';
import type { Margins } from '../margin/margins.ts';
import { marginsOf } from '../margin/of-response.ts';
import { formatNumber } from '../mechanism/quantity.ts';
import type { Diagnosis } from './diagnosis.ts';
import { amount, outputText } from './reasons.ts';
import { sameGains } from './search.ts';
import { bestProven, lastOf, provenMoves, type Situation, sameMove } from './situation.ts';
import type { Outcome } from './step.ts';

/** Minutes that one more trial takes at the side of a field: place it, tick the list, run, read. Common practice, no source. */
const MINUTES_A_TRIAL = 2.5;

/** The outcome of a run whose gains met the target in trials on every move. */
export function metOutcome(situation: Situation, gains: Gains): Outcome {
  const { target } = situation.profile;
  const worst = worstProof(situation, gains);
  const figures =
    worst === null
      ? ''
      : ` Slowest settled in ${formatNumber(worst, 2)} s of ${formatNumber(target.settlingTime, 2)} s.`;
  return {
    met: true,
    stopped: 'target met',
    gains,
    why: `Met in trials on ${target.moves.length === 1 ? 'the move' : `all ${target.moves.length} moves`} of the target.${figures} Keep these gains with their logs before anything is changed.`,
    margins: marginsFor(situation, gains),
  };
}

/** The outcome of a run that ends without a met target: the best proven gains are held, and it says what stands in the way. */
export function stoppedOutcome(situation: Situation, diagnosis: Diagnosis): Outcome {
  const best = bestProven(situation);
  const gains = best?.gains ?? situation.profile.gains;
  const held =
    best === null
      ? 'No gains were proven; the profile keeps those it had.'
      : `Held: the gains that met the target on ${best.moves} of ${situation.profile.target.moves.length} moves.`;
  return {
    met: false,
    stopped: diagnosis.stopped,
    gains,
    why: `${diagnosis.why} ${held}`,
    margins: best === null ? null : marginsFor(situation, gains),
  };
}

/** Trials or minutes used up; null while there is room for one more. */
export function endOfRun(situation: Situation): Diagnosis | null {
  const { trials, maxTrials, minutesLeft } = situation.history;
  if (trials.length >= maxTrials) {
    return { stopped: 'trials used up', why: `All ${maxTrials} trials are used. ${shortfall(situation)}` };
  }
  if (minutesLeft !== null && minutesLeft < MINUTES_A_TRIAL) {
    return {
      stopped: 'minutes used up',
      why: `${formatNumber(Math.max(0, minutesLeft), 1)} min are left and a trial takes about ${MINUTES_A_TRIAL}: hold what is proven. ${shortfall(situation)}`,
    };
  }
  return null;
}

/** By how much the last trial missed the target, and which limit stands in the way. */
function shortfall(situation: Situation): string {
  const last = lastOf(situation);
  if (last === null) return 'No trial was run.';
  const { profile, learnt } = situation;
  const { target } = profile;
  const { figures } = last.reading;
  const misses: string[] = [];
  if (figures.settlingTime === null) misses.push('it did not settle');
  else if (figures.settlingTime > target.settlingTime) {
    misses.push(
      `it settled in ${formatNumber(figures.settlingTime, 2)} s, ${formatNumber(figures.settlingTime - target.settlingTime, 2)} s too late`,
    );
  }
  if (figures.overshoot > target.overshoot) {
    misses.push(
      `it overshot by ${formatNumber(figures.overshoot, 1)} %, ${formatNumber(target.overshoot, 1)} % is allowed`,
    );
  }
  if (figures.restingError !== null && Math.abs(figures.restingError) > target.tolerance) {
    misses.push(`it rested ${amount(Math.abs(figures.restingError), profile)} off`);
  }
  const missed =
    misses.length === 0 ? 'The last trial met the target on its move.' : `Last trial: ${misses.join('; ')}.`;
  return learnt === null ? missed : `${missed} ${limitInTheWay(situation)}`;
}

function limitInTheWay(situation: Situation): string {
  const { profile, learnt } = situation;
  const last = lastOf(situation);
  if (learnt === null || last === null) return '';
  const { response } = learnt;
  const { figures } = last.reading;
  if (figures.saturated > 0.6)
    return `The motor is the limit: output was at its limit for ${formatNumber(100 * figures.saturated, 0)} % of the time.`;
  if (response.delay > 0.25 * profile.target.settlingTime) {
    return `Dead time is the limit: ${formatNumber(1000 * response.delay, 0)} ms pass before an output is seen.`;
  }
  if (Math.max(response.breakaway, response.breakawayBack) > 0.2) {
    return `Friction is the limit: ${outputText(response.breakaway, profile)} of output before it moves at all.`;
  }
  return '';
}

function worstProof(situation: Situation, gains: Gains): number | null {
  const proven = provenMoves(situation, gains);
  const times = situation.history.trials.flatMap((trial, index) => {
    const time = situation.readings[index]?.figures.settlingTime ?? null;
    const counts = proven.some((move) => sameMove(move, trial.move));
    return counts && sameGains(trial.gains, gains) && time !== null ? [time] : [];
  });
  return times.length === 0 ? null : Math.max(...times);
}

/** Margins of the linear loop on the best estimate; null before anything is learnt. */
export function marginsFor(situation: Situation, gains: Gains): Margins | null {
  const { learnt, profile } = situation;
  if (learnt === null || gains.kp <= 0) return null;
  return marginsOf({
    response: learnt.response,
    quantity: profile.quantity,
    gains,
    settings: profile.controller,
    sensorDelay: profile.sensor?.delay ?? 0,
  });
}
