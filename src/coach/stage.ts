import type { Stage } from '../trial/trial.ts';
import type { Verdict, VerdictName } from '../trial/verdict.ts';
import { lastOf, type Situation, trialsIn } from './situation.ts';

/** Which stage comes next, and the reason in words where a stage is skipped or gone back to. */
export interface StageChoice {
  readonly stage: Stage;
  readonly because: string | null;
}

/** What the searches found, as far as the choice of a stage needs it. */
export interface Outlook {
  /** Share of draws and moves that meet the target under P alone (and what carries the load). */
  readonly proportionalMeets: number;
  /** Does the best full set use an integral? */
  readonly needsIntegral: boolean;
}

/** Share of draws and moves that must meet the aim before P alone is taken for enough. */
export const PROMISING = 0.7;

const MOST_PROPORTIONAL = 3;
const MOST_INTEGRAL = 2;

const has = (verdicts: readonly Verdict[], ...names: readonly VerdictName[]) =>
  verdicts.some((verdict) => names.includes(verdict.is));

/**
 * The stage after a trial that did not end the run; design's coach, Stages. P first, then I with its zone, then D; a stage
 * that the model shows to be needless is skipped with the reason.
 */
export function nextStage(situation: Situation, outlook: Outlook): StageChoice {
  const last = lastOf(situation);
  if (last === null) return { stage: 'ready', because: null };
  const { trial, reading } = last;
  switch (trial.stage) {
    case 'ready':
      return { stage: 'proportional', because: null };
    case 'proportional':
      if (outlook.proportionalMeets >= PROMISING && trialsIn(situation, 'proportional') < MOST_PROPORTIONAL) {
        return { stage: 'proportional', because: null };
      }
      return afterProportional(situation, outlook);
    case 'integral': {
      const rests = reading.figures.settlingTime !== null && !has(reading.verdicts, 'hunting', 'stuck-short');
      if (!rests && outlook.needsIntegral && trialsIn(situation, 'integral') < MOST_INTEGRAL) {
        return { stage: 'integral', because: null };
      }
      return { stage: 'derivative', because: null };
    }
    case 'derivative':
      return { stage: 'derivative', because: null };
    case 'proof':
      return afterProof(reading.verdicts, trial.gains.ki > 0, outlook);
  }
}

function afterProportional(situation: Situation, outlook: Outlook): StageChoice {
  const rested = lastOf(situation)?.reading.figures.settlingTime != null;
  if (!outlook.needsIntegral) {
    const because = rested
      ? 'No integral: P alone already rests inside the tolerance.'
      : 'No integral: with D to brake, a higher Kp rests inside the tolerance by itself.';
    return { stage: 'derivative', because };
  }
  return { stage: 'integral', because: null };
}

function afterProof(verdicts: readonly Verdict[], hasIntegral: boolean, outlook: Outlook): StageChoice {
  if (has(verdicts, 'stuck-short', 'hunting') && (outlook.needsIntegral || hasIntegral)) {
    return { stage: 'integral', because: 'Back to the integral: this move came to rest outside the tolerance.' };
  }
  return { stage: 'derivative', because: 'Back to the joint trim: this move missed the target that another move met.' };
}
