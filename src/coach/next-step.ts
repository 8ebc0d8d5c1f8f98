import { learn } from '../learn/learn.ts';
import type { LearntModel } from '../learn/learnt.ts';
import { priorOf } from '../learn/prior.ts';
import { hopelessProfile, hopelessVerdict } from './diagnosis.ts';
import { DRAWS } from './draws.ts';
import { endOfRun, metOutcome, stoppedOutcome } from './outcome.ts';
import { planTrial } from './plan.ts';
import { readTrials } from './reading.ts';
import { bestProven, lastOf, type Situation, unprovenMoves } from './situation.ts';
import type { CoachStep, RunHistory, RunReading } from './step.ts';
import { trustOf } from './trust.ts';

/**
 * What to do after the trials so far: the next trial with its reason and promise, or the end of the run with the reason.
 * The same history gives the same answer.
 *
 * @param history  the profile and every trial of the run since the last mechanical change, oldest first
 */
export function nextStep(history: RunHistory): CoachStep {
  const situation = situationOf(history);
  const reading: RunReading = { trials: situation.readings, learnt: situation.learnt };
  const stop = (outcome: ReturnType<typeof stoppedOutcome>): CoachStep => ({ kind: 'stop', outcome, reading });

  const broken = hopelessProfile(history.profile) ?? hopelessVerdict(situation);
  if (broken !== null) return stop(stoppedOutcome(situation, broken));
  const last = lastOf(situation);
  if (last !== null) {
    const best = bestProven(situation);
    if (best !== null && unprovenMoves(situation, best.gains).length === 0)
      return stop(metOutcome(situation, best.gains));
  }
  const ended = endOfRun(situation);
  if (ended !== null) return stop(stoppedOutcome(situation, ended));
  const plan = planTrial(situation);
  return plan.kind === 'stop'
    ? stop(stoppedOutcome(situation, plan.diagnosis))
    : { kind: 'trial', proposal: plan.proposal, reading };
}

/** Works out what one decision rests on. */
function situationOf(history: RunHistory): Situation {
  const prior = priorOf(history.profile);
  const learnt = learntFrom(history);
  const readings = readTrials(history, learnt);
  return { history, profile: history.profile, prior, learnt, readings, trust: trustOf(readings) };
}

function learntFrom(history: RunHistory): LearntModel | null {
  if (history.trials.length === 0) return null;
  return learn({
    profile: history.profile,
    trials: history.trials.map(({ samples, gains, outputCap, move }) => ({ samples, gains, outputCap, move })),
    draws: DRAWS,
    seed: history.seed,
  });
}
