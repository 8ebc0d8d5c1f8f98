import type { Gains } from '../controller/settings.ts';
import type { Move, Profile } from '../mechanism/profile.ts';
import type { ModelParameter, ResponseModel } from '../plant/response-model.ts';
import type { Interval } from '../record/band.ts';
import type { Samples } from '../record/samples.ts';

/** One trial as evidence about the mechanism. */
export interface TrialEvidence {
  readonly samples: Samples;
  /** The gains it ran under; null when unknown (then the log must hold the output). */
  readonly gains: Gains | null;
  /** Largest output allowed, fraction of full output. */
  readonly outputCap: number;
  /** Null when unknown: taken from the setpoint column. */
  readonly move: Move | null;
  /** What the measured column is, where it is not the profile's quantity: the speed of a position mechanism, in its unit a second. */
  readonly quantity?: Profile['quantity'] | undefined;
}

export interface LearnRequest {
  /** Supplies quantity, gravity, stops, controller, sensor and (where it knows the machine) the prior. */
  readonly profile: Profile;
  /** All trials since the last mechanical change, oldest first. */
  readonly trials: readonly TrialEvidence[];
  /** A prior that replaces the nameplate's, for example after a mechanical change. */
  readonly prior?: Prior | undefined;
  /** What earlier trials of the same mechanism taught: where the fit starts from, which makes it quicker. */
  readonly from?: Pick<LearntModel, 'response' | 'rowShift'> | undefined;
  /** How many posterior draws; 64 is usual. */
  readonly draws: number;
  readonly seed: number;
}

/** What is believed before any log: a centre, and σ in ln of each parameter (absolute σ for hold, s for delay). */
export interface Prior {
  readonly response: ResponseModel;
  readonly sigma: Readonly<Record<ModelParameter, number>>;
}

/** The response model that the trials so far support. */
export interface LearntModel {
  readonly response: ResponseModel;
  readonly intervals: Readonly<Record<ModelParameter, Interval>>;
  /** Posterior draws, seeded. */
  readonly draws: readonly ResponseModel[];
  /** 100·(1 − ‖y − ŷ‖ / ‖y − mean y‖), simulated output error; null before the first log. */
  readonly fit: number | null;
  /** One sigma of what the model leaves unexplained, profile unit. */
  readonly residual: number;
  /** Rows by which the output column had to be shifted to line up with the motion: 0, 1, … */
  readonly rowShift: number;
  /** True when a log had no output column and it was rebuilt from the gains. */
  readonly outputRebuilt: boolean;
  /** Parameters whose interval is as wide as their prior. */
  readonly unlearnt: readonly ModelParameter[];
  /** False when the model explains the logs too badly to be searched on. */
  readonly usable: boolean;
  readonly warnings: readonly string[];
}
