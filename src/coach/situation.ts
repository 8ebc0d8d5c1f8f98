import type { Gains } from '../controller/settings.ts';
import type { LearntModel, Prior } from '../learn/learnt.ts';
import type { Move, Profile } from '../mechanism/profile.ts';
import { sameGains } from './search.ts';
import type { RunHistory, TrialReading, TrialRecord } from './step.ts';

/** All that one decision rests on, worked out once. */
export interface Situation {
  readonly history: RunHistory;
  readonly profile: Profile;
  readonly prior: Prior;
  /** Null before the first trial. */
  readonly learnt: LearntModel | null;
  readonly readings: readonly TrialReading[];
  readonly trust: number;
}

/** The last trial and what was read of it; null before the first. */
export function lastOf(situation: Situation): { readonly trial: TrialRecord; readonly reading: TrialReading } | null {
  const trial = situation.history.trials.at(-1);
  const reading = situation.readings.at(-1);
  return trial && reading ? { trial, reading } : null;
}

/** The target's moves as records. */
export function targetMoves(profile: Profile): readonly Move[] {
  return profile.target.moves.map(([from, to]) => ({ from, to }));
}

export function sameMove(a: Move, b: Move): boolean {
  const near = (x: number, y: number) => Math.abs(x - y) <= 1e-9 * Math.max(1, Math.abs(x), Math.abs(y));
  return near(a.from, b.from) && near(a.to, b.to);
}

/** Does a trial count as proof of the gains: the target met on one of its moves, with all the output it will have? */
function countsAsProof(situation: Situation, index: number): boolean {
  const trial = situation.history.trials[index];
  const reading = situation.readings[index];
  if (!trial || !reading?.meets) return false;
  const full = trial.outputCap >= situation.profile.limits.outputCap * (1 - 1e-9);
  return full && targetMoves(situation.profile).some((move) => sameMove(move, trial.move));
}

/** The target's moves that these gains have met in trials, failures of the same gains on the same move taken off. */
export function provenMoves(situation: Situation, gains: Gains): readonly Move[] {
  return targetMoves(situation.profile).filter((move) => {
    let proven = false;
    situation.history.trials.forEach((trial, index) => {
      if (!sameGains(trial.gains, gains) || !sameMove(trial.move, move)) return;
      proven = countsAsProof(situation, index);
    });
    return proven;
  });
}

/** The target's moves still to be proven with these gains. */
export function unprovenMoves(situation: Situation, gains: Gains): readonly Move[] {
  const proven = provenMoves(situation, gains);
  return targetMoves(situation.profile).filter((move) => !proven.some((done) => sameMove(done, move)));
}

/** The gains that trials have proven on most moves (the latest of equals); null when none met the target anywhere. */
export function bestProven(situation: Situation): { readonly gains: Gains; readonly moves: number } | null {
  let best: { readonly gains: Gains; readonly moves: number } | null = null;
  for (const trial of situation.history.trials) {
    const moves = provenMoves(situation, trial.gains).length;
    if (moves > 0 && moves >= (best?.moves ?? 0)) best = { gains: trial.gains, moves };
  }
  return best;
}

/** How many trials of a stage the run has had. */
export function trialsIn(situation: Situation, stage: TrialRecord['stage']): number {
  return situation.history.trials.filter((trial) => trial.stage === stage).length;
}
