import type { Gains } from '../controller/settings.ts';
import type { LearntModel } from '../learn/learnt.ts';
import type { Margins } from '../margin/margins.ts';
import type { Move, Profile } from '../mechanism/profile.ts';
import type { Band } from '../record/band.ts';
import type { Samples } from '../record/samples.ts';
import type { Figures } from '../trial/figures.ts';
import type { Stage } from '../trial/trial.ts';
import type { Verdict } from '../trial/verdict.ts';

/** One trial of a run, as it happened. */
export interface TrialRecord {
  /** 1, 2, 3 … */
  readonly trial: number;
  readonly stage: Stage;
  readonly gains: Gains;
  readonly move: Move;
  readonly outputCap: number;
  readonly samples: Samples;
  /** The band it was promised; null when nothing was promised. */
  readonly band: Band | null;
}

/** Everything the coach may look at: a run so far. */
export interface RunHistory {
  readonly profile: Profile;
  readonly trials: readonly TrialRecord[];
  readonly maxTrials: number;
  /** Minutes until the next appointment; null = no hurry. */
  readonly minutesLeft: number | null;
  readonly seed: number;
}

/** The next trial, and why. */
export interface Proposal {
  readonly stage: Stage;
  readonly gains: Gains;
  readonly move: Move;
  /** s to record. */
  readonly duration: number;
  /** Fraction of full output. */
  readonly outputCap: number;
  /** Why these gains, in the machine's own numbers. */
  readonly why: string;
  /** What to expect, in one sentence. */
  readonly expect: string;
  /** What would change the coach's mind. */
  readonly unless: string;
  /** What held the gains below what the model would like; null = nothing did. */
  readonly boundedBy: string | null;
  readonly band: Band | null;
  /** Expected figures: [best, low, high] of settling time and overshoot over the draws. */
  readonly expected: ExpectedFigures | null;
  readonly margins: Margins | null;
}

export interface ExpectedFigures {
  readonly settlingTime: readonly [best: number | null, low: number | null, high: number | null];
  readonly overshoot: readonly [best: number, low: number, high: number];
  readonly restingError: readonly [best: number, low: number, high: number];
}

/** What the coach makes of each trial that was run. */
export interface TrialReading {
  readonly trial: number;
  readonly figures: Figures;
  readonly verdicts: readonly Verdict[];
  /** Null when no band was promised. */
  readonly inBand: boolean | null;
  /** Does it meet the target on its own move? */
  readonly meets: boolean;
}

/** What to do next. */
export type CoachStep =
  | { readonly kind: 'trial'; readonly proposal: Proposal; readonly reading: RunReading }
  | { readonly kind: 'stop'; readonly outcome: Outcome; readonly reading: RunReading };

export interface RunReading {
  readonly trials: readonly TrialReading[];
  readonly learnt: LearntModel | null;
}

/** How a run ended. */
export interface Outcome {
  /** True only when trials, not the model, met the target on every move. */
  readonly met: boolean;
  /** A short phrase: "target met", "trials used up", "reversed" … */
  readonly stopped: string;
  /** The best gains that trials have proven, or the profile's when none did. */
  readonly gains: Gains;
  /** In the machine's numbers: what was reached, by how much it missed, which limit stands in the way, what to mend. */
  readonly why: string;
  readonly margins: Margins | null;
}
