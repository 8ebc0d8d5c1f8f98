import type { LearntModel } from '../learn/learnt.ts';
import type { Move } from '../mechanism/profile.ts';
import { firstCap, nextCap } from '../safety/cap.ts';
import { aimOf, rehearsalDuration } from './aim.ts';
import type { Diagnosis } from './diagnosis.ts';
import { drawsOf } from './draws.ts';
import type { Ground } from './evaluate.ts';
import { measuredStep } from './fallback.ts';
import {
  type Choice,
  FULL_EFFORT,
  intersect,
  type SearchGround,
  searchAll,
  searchIntegral,
  searchProportional,
  THRIFTY_EFFORT,
  widestBounds,
} from './outlook.ts';
import { type Draft, finish } from './proposal.ts';
import { firstTrial, machineKnown } from './ready.ts';
import { derivativeWhy, integralWhy, proofWhy, proportionalWhy, readyWhy } from './reasons.ts';
import { rehearsalOf } from './rehearsal.ts';
import { kdLimit } from './scales.ts';
import { lastOf, provenMoves, type Situation, sameMove, targetMoves, trialsIn, unprovenMoves } from './situation.ts';
import { nextStage, type Outlook, PROMISING } from './stage.ts';
import type { Proposal, TrialReading, TrialRecord } from './step.ts';
import { trustedBounds } from './trust.ts';

export type Plan =
  | { readonly kind: 'trial'; readonly proposal: Proposal }
  | { readonly kind: 'stop'; readonly diagnosis: Diagnosis };

const MOST_READY = 4;

/** The next trial of a run that goes on, or why there is none. */
export function planTrial(situation: Situation): Plan {
  const last = lastOf(situation);
  const { learnt } = situation;
  if (last === null || learnt === null || readyAgain(situation, last)) return planReady(situation);
  if (provesOnwards(situation, last)) return planProof(situation, last);
  if (!learnt.usable) return planMeasured(situation, last);
  return planSearched(situation, learnt, last, searchGround(situation, learnt));
}

type Last = { readonly trial: TrialRecord; readonly reading: TrialReading };

/** A first move that showed nothing is repeated with more output, as far as the cap of the profile goes. */
function readyAgain(situation: Situation, last: Last): boolean {
  if (last.trial.stage !== 'ready' || trialsIn(situation, 'ready') >= MOST_READY) return false;
  if (last.trial.outputCap >= situation.profile.limits.outputCap) return false;
  return !movedEnough(situation, last.trial);
}

function movedEnough({ profile }: Situation, trial: TrialRecord): boolean {
  const { measured } = trial.samples;
  const start = measured[0] ?? 0;
  let farthest = 0;
  for (const value of measured) farthest = Math.max(farthest, Math.abs(value - start));
  const travel = Math.abs(trial.move.to - trial.move.from);
  return farthest > Math.max(4 * (profile.sensor?.resolution ?? 0), 0.1 * travel);
}

function planReady(situation: Situation): Plan {
  const { profile, prior } = situation;
  const attempt = trialsIn(situation, 'ready');
  const first = firstTrial(profile, prior, firstCap(profile, prior.response), attempt);
  const why = readyWhy(profile, first, machineKnown(prior), attempt);
  return finish(situation, { ...first, stage: 'ready', why, boundedBy: null });
}

/** Did the last trial meet the target in a way that counts, so that its gains go on to the other moves? */
function provesOnwards(situation: Situation, last: Last): boolean {
  return provenMoves(situation, last.trial.gains).length > 0 && last.reading.meets;
}

function planProof(situation: Situation, last: Last): Plan {
  const { profile } = situation;
  const move = unprovenMoves(situation, last.trial.gains)[0] ?? last.trial.move;
  return finish(situation, {
    stage: 'proof',
    gains: last.trial.gains,
    move,
    duration: rehearsalDuration(profile),
    outputCap: profile.limits.outputCap,
    why: proofWhy(profile, move, provenMoves(situation, last.trial.gains).length),
    boundedBy: null,
  });
}

/** Trials in which no model explains the motion before a person has to look. */
const MOST_UNEXPLAINED = 4;

function planMeasured(situation: Situation, last: Last): Plan {
  if (situation.history.trials.length >= MOST_UNEXPLAINED) {
    return {
      kind: 'stop',
      diagnosis: {
        stopped: 'not explained',
        why: 'No model of this kind of mechanism explains its motion, so no promise can be made. Look for a reversed sign, a slipping or wrongly wired sensor, something loose, or output that is not what the log says.',
      },
    };
  }
  const step = measuredStep(situation.profile, last.trial, last.reading);
  const stage = step.gains.kd > 0 ? 'derivative' : step.gains.ki > 0 ? 'integral' : 'proportional';
  return finish(situation, {
    ...draftOf(situation, last),
    stage,
    gains: step.gains,
    why: `${step.because} The response model explains the logs too badly to search on, so this step goes by the measured response alone.`,
    boundedBy: 'the fit of the model',
  });
}

function planSearched(situation: Situation, learnt: LearntModel, last: Last, search: SearchGround): Plan {
  const { profile, trust } = situation;
  const widest = widestBounds(profile);
  const bounds = intersect(widest, trustedBounds(last.trial.gains, trust, kdLimit(profile)));
  const destination = searchAll(learnt.response, profile, widest, search);
  const proportional = searchProportional(learnt.response, profile, bounds, search);
  const outlook: Outlook = {
    proportionalMeets: proportional.score.meets,
    needsIntegral: destination.gains.ki > 0,
  };
  const choice = nextStage(situation, outlook);
  const draft = draftOf(situation, last);
  const because = choice.because === null ? '' : `${choice.because} `;
  switch (choice.stage) {
    case 'proportional': {
      const final = proportional.score.meets >= PROMISING;
      // On the way to the full set: its Kp, as far as P alone can be let run with it.
      const kp = final
        ? proportional.gains.kp
        : Math.min(destination.gains.kp, 2 * proportional.gains.kp, bounds.kp[1]);
      const gains = { ...proportional.gains, kp };
      const boundedBy = kp < 0.98 * destination.gains.kp && !final ? 'what P alone can brake' : null;
      return finish(situation, {
        ...draft,
        stage: 'proportional',
        gains,
        why: proportionalWhy(profile, gains, learnt, final),
        boundedBy,
      });
    }
    case 'integral': {
      const found = searchIntegral(last.trial.gains, learnt.response, profile, bounds, search);
      const why = because + integralWhy(profile, found.gains, learnt, last.trial, last.reading);
      return finish(situation, { ...draft, stage: 'integral', gains: found.gains, why, boundedBy: null });
    }
    default: {
      const found = jointTrim(situation, learnt, destination, bounds, search);
      const why = because + derivativeWhy(profile, found.gains, learnt, last.trial, last.reading);
      const boundedBy =
        found.gains.kp < 0.95 * destination.gains.kp ? `trust: at most ${trust.toFixed(1)} times the last Kp` : null;
      return finish(situation, { ...draft, stage: 'derivative', gains: found.gains, why, boundedBy });
    }
  }
}

/** The destination where trust lets it, else the best inside the trusted box. */
function jointTrim(
  situation: Situation,
  learnt: LearntModel,
  destination: Choice,
  bounds: ReturnType<typeof widestBounds>,
  search: SearchGround,
): Choice {
  const { gains } = destination;
  const inside =
    gains.kp <= bounds.kp[1] && gains.kp >= bounds.kp[0] && gains.ki <= bounds.ki[1] && gains.kd <= bounds.kd[1];
  return inside ? destination : searchAll(learnt.response, situation.profile, bounds, search);
}

function draftOf(situation: Situation, last: Last): Omit<Draft, 'stage' | 'gains' | 'why' | 'boundedBy'> {
  const { profile } = situation;
  return {
    move: nextMove(situation, last.trial),
    duration: rehearsalDuration(profile),
    // A model that explains nothing promises nothing: the cap does not rise on it.
    outputCap: nextCap(profile, last.trial.outputCap, situation.learnt?.usable ? last.reading.inBand : false),
  };
}

/** The move that was just missed; before any, the target's move that starts nearest to where the last trial began. */
function nextMove(situation: Situation, last: TrialRecord): Move {
  const moves = targetMoves(situation.profile);
  const first = moves[0] ?? last.move;
  if (moves.some((move) => sameMove(move, last.move))) return last.move;
  const end = last.move.from;
  return moves.reduce(
    (best, move) => (Math.abs(move.from - end) < Math.abs(best.from - end) - 1e-12 ? move : best),
    first,
  );
}

function searchGround(situation: Situation, learnt: LearntModel): SearchGround {
  const { profile } = situation;
  const draws = drawsOf(profile, [learnt.response, ...learnt.draws]);
  const aim = aimOf(situation);
  const ground: Ground = {
    profile,
    aim,
    moves: targetMoves(profile),
    outputCap: profile.limits.outputCap,
    rehearsal: rehearsalOf(profile, aim.duration, aim.tolerance, situation.history.seed),
  };
  return { ground, draws, effort: profile.kind === 'arm' ? THRIFTY_EFFORT : FULL_EFFORT };
}
