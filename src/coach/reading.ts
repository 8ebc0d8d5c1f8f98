import type { LearntModel } from '../learn/learnt.ts';
import { inBand } from '../learn/predict.ts';
import { responseOf } from '../mechanism/plant-of.ts';
import type { ResponseModel } from '../plant/response-model.ts';
import { readTrial } from '../trial/reading.ts';
import type { RunHistory, TrialReading } from './step.ts';

/** What the coach makes of each trial of a run, with the model that they all taught. */
export function readTrials(history: RunHistory, learnt: LearntModel | null): readonly TrialReading[] {
  const { profile } = history;
  const nameplate = responseOf(profile);
  const usable = learnt?.usable ? learnt : null;
  return history.trials.map((trial) => {
    const promise = trial.band === null ? null : inBand(trial.samples, trial.band, profile.continuous);
    const { figures, verdicts, meets } = readTrial(trial.samples, {
      profile,
      gains: trial.gains,
      move: trial.move,
      outputCap: trial.outputCap,
      response: usable?.response ?? null,
      reach: usable === null ? null : optimistic(usable),
      nameplate,
      promise,
    });
    return { trial: trial.trial, figures, verdicts, inBand: promise?.inside ?? null, meets };
  });
}

/** The most that the machine may be able to, within the 95 % intervals. */
function optimistic({ response, intervals }: LearntModel): ResponseModel {
  return {
    ...response,
    topSpeed: intervals.topSpeed.high,
    lag: intervals.lag.low,
    drag: intervals.drag.low,
    dragBack: Math.min(response.dragBack, intervals.drag.low),
    delay: intervals.delay.low,
  };
}
