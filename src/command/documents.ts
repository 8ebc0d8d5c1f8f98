import type { Outcome, TrialReading, TrialRecord } from '../coach/step.ts';
import type { LearntModel } from '../learn/learnt.ts';
import type { Margins } from '../margin/margins.ts';
import { MODEL_PARAMETERS } from '../plant/response-model.ts';
import type { Interval } from '../record/band.ts';
import type { Figures } from '../trial/figures.ts';

// The parts of the JSON results that several commands share; shapes in contracts, section 5.

type Triple = readonly [best: number, low: number, high: number];

const tripleOf = ({ best, low, high }: Interval): Triple => [best, low, high];

/** The eight figures of every result, by contract's name; null = it has no value. */
export function figuresDocument(figures: Figures) {
  const { riseTime, overshoot, settlingTime, restingError, swingRatio, swingPeriod, saturated, chatter } = figures;
  return { riseTime, overshoot, settlingTime, restingError, swingRatio, swingPeriod, saturated, chatter };
}

/** The response model as [best, low, high] with a 95 % interval; null before any log. */
export function modelDocument(learnt: LearntModel | null): Readonly<Record<string, Triple>> | null {
  if (learnt === null) return null;
  return Object.fromEntries(MODEL_PARAMETERS.map((name) => [name, tripleOf(learnt.intervals[name])]));
}

export function marginsDocument(margins: Margins | null) {
  if (margins === null) return null;
  const { gain, phase, delay, maxSensitivity } = margins;
  return { gain, phase, delay, maxSensitivity };
}

/** One trial of `tune`'s result, with the file it was kept in and why its gains were chosen. */
export interface KeptTrial {
  readonly record: TrialRecord;
  readonly reading: TrialReading;
  /** Path of its log, relative to the profiles folder; null when nothing was written. */
  readonly log: string | null;
  readonly why: string;
}

/** `holdfast/tune-result@1`, to the letter. */
export function tuneDocument(
  profile: string,
  outcome: Outcome,
  trials: readonly KeptTrial[],
  learnt: LearntModel | null,
): Readonly<Record<string, unknown>> {
  return {
    format: 'holdfast/tune-result@1',
    profile,
    met: outcome.met,
    stopped: outcome.stopped,
    gains: outcome.gains,
    trials: trials.map(({ record, reading, log, why }) => ({
      trial: record.trial,
      stage: record.stage,
      gains: record.gains,
      move: record.move,
      outputCap: record.outputCap,
      log,
      figures: figuresDocument(reading.figures),
      verdict: reading.verdicts.map((verdict) => verdict.is),
      why,
      inBand: reading.inBand,
    })),
    model: modelDocument(learnt),
    margins: marginsDocument(outcome.margins),
  };
}
