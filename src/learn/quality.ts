import type { Profile } from '../mechanism/profile.ts';
import { driveOf, type Unusable } from './evidence.ts';
import type { LearntModel, TrialEvidence } from './learnt.ts';
import { leftoverOf } from './leftover.ts';
import { answersTo, fitPercent } from './output-error.ts';

/** How well a model explains a trial that it need not have learnt from. */
export interface FitQuality {
  /** 100·(1 − ‖y − ŷ‖ / ‖y − mean y‖), simulated output error. */
  readonly fit: number;
  /** One sigma of what is left, robust, unit of the readings. */
  readonly residual: number;
}

/**
 * Drives a model with a trial's output and compares: no parameter is changed.
 *
 * @returns why the trial tells nothing, when it does not
 */
export function fitQuality(
  model: Pick<LearntModel, 'response' | 'rowShift'>,
  trial: TrialEvidence,
  profile: Profile,
): FitQuality | Unusable {
  const drive = driveOf(trial, profile);
  if (typeof drive === 'string') return drive;
  const answers = answersTo([drive], profile, model.rowShift).of(model.response);
  return { fit: fitPercent([drive], answers), residual: leftoverOf([drive], answers).spread };
}
