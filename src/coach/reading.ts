import type { LearntModel } from '../learn/learnt.ts';
import { inBand } from '../learn/predict.ts';
import { responseOf } from '../mechanism/plant-of.ts';
import { readTrial } from '../trial/reading.ts';
import type { RunHistory, TrialReading, TrialRecord } from './step.ts';

/** What the coach makes of each trial of a run, with the model that they all taught. */
export function readTrials(history: RunHistory, learnt: LearntModel | null): readonly TrialReading[] {
  const nameplate = responseOf(history.profile);
  return history.trials.map((trial) => {
    const reading = readTrial(trial.samples, {
      profile: history.profile,
      gains: trial.gains,
      move: trial.move,
      outputCap: trial.outputCap,
      response: learnt?.usable ? learnt.response : null,
      nameplate,
      band: trial.band,
      otherDirection: otherDirection(history, trial),
    });
    return {
      trial: trial.trial,
      figures: reading.figures,
      verdicts: reading.verdicts,
      inBand: trial.band === null ? null : inBand(trial.samples, trial.band).inside,
      meets: reading.meets,
    };
  });
}

/** The latest other trial under the same gains whose move went the other way; null when there is none. */
function otherDirection(history: RunHistory, trial: TrialRecord): TrialRecord | null {
  const way = Math.sign(trial.move.to - trial.move.from);
  for (let index = history.trials.length - 1; index >= 0; index--) {
    const other = history.trials[index];
    if (!other || other.trial === trial.trial) continue;
    const same =
      other.gains.kp === trial.gains.kp && other.gains.ki === trial.gains.ki && other.gains.kd === trial.gains.kd;
    if (same && Math.sign(other.move.to - other.move.from) === -way) return other;
  }
  return null;
}
