import type { Gains } from '../controller/settings.ts';
import { predict } from '../learn/predict.ts';
import type { Move } from '../mechanism/profile.ts';
import type { Stage } from '../trial/trial.ts';
import type { Diagnosis } from './diagnosis.ts';
import { type Draw, drawsOf, knownResponses } from './draws.ts';
import { marginsFor } from './outcome.ts';
import { expectText, unlessText } from './reasons.ts';
import { rehearsalOf } from './rehearsal.ts';
import { makeSafe } from './safe.ts';
import type { Situation } from './situation.ts';
import type { ExpectedFigures, Proposal } from './step.ts';

/** A trial as planned, before safety has looked at it and before it is promised. */
export interface Draft {
  readonly stage: Stage;
  readonly gains: Gains;
  readonly move: Move;
  readonly duration: number;
  readonly outputCap: number;
  readonly why: string;
  readonly boundedBy: string | null;
}

/** Makes a draft safe over all draws, and adds its promise: band, expected figures, margins, words. */
export function finish(
  situation: Situation,
  draft: Draft,
): { readonly kind: 'trial'; readonly proposal: Proposal } | { readonly kind: 'stop'; readonly diagnosis: Diagnosis } {
  const { profile, learnt, prior } = situation;
  const responses = knownResponses(learnt, prior, situation.history.seed);
  // Nothing known: nothing to rehearse on, and nothing promised.
  const draws = responses === null ? null : drawsOf(profile, responses);
  const rehearsal = rehearsalOf(profile, draft.duration, profile.target.tolerance, situation.history.seed);
  const safe = draws === null ? { gains: draft.gains, bounded: null } : makeSafe(profile, draws, rehearsal, draft);
  if (safe === null) {
    return {
      kind: 'stop',
      diagnosis: {
        stopped: 'no safe trial',
        why: 'No gains were found for this move that keep 99 of 100 rehearsals inside the travel limits and free of growing swing. Give the move more room from the limits, or lower the output cap.',
      },
    };
  }
  const { gains } = safe;
  const trial = { ...draft, gains };
  const expected = draws === null ? null : expectedOf(draws, rehearsal, trial);
  const band =
    responses === null
      ? null
      : predict({
          profile,
          draws: responses,
          residual: learnt?.residual ?? 0,
          gains,
          move: draft.move,
          duration: draft.duration,
          outputCap: draft.outputCap,
          seed: situation.history.seed,
        }).band;
  return {
    kind: 'trial',
    proposal: {
      ...trial,
      boundedBy: safe.bounded === null ? draft.boundedBy : boundedText(safe.bounded),
      expect: expectText(profile, expected, draft.move),
      unless: unlessText(prior, learnt, profile),
      band,
      expected,
      margins: marginsFor(situation, gains),
    },
  };
}

function boundedText(bounded: 'limits' | 'growing-swing'): string {
  return bounded === 'limits' ? 'the travel limits' : 'a swing that would grow in some of the rehearsals';
}

function expectedOf(
  draws: readonly Draw[],
  rehearsal: ReturnType<typeof rehearsalOf>,
  trial: Pick<Draft, 'gains' | 'move' | 'outputCap'>,
): ExpectedFigures {
  const settling: number[] = [];
  const overshoot: number[] = [];
  const rest: number[] = [];
  for (const draw of draws) {
    const quick = rehearsal.run(draw.plant, trial.gains, trial.move, trial.outputCap);
    settling.push(quick.settlingTime ?? Number.POSITIVE_INFINITY);
    overshoot.push(quick.overshoot);
    rest.push(Math.abs(quick.endError));
  }
  const settle = spread(settling).map((value) => (Number.isFinite(value) ? value : null));
  return {
    settlingTime: [settle[0] ?? null, settle[1] ?? null, settle[2] ?? null],
    overshoot: spread(overshoot),
    restingError: spread(rest),
  };
}

/** Median, 5th and 95th percentile. */
function spread(values: readonly number[]): readonly [middle: number, low: number, high: number] {
  const sorted = [...values].sort((a, b) => a - b);
  const at = (share: number) => sorted[Math.min(sorted.length - 1, Math.floor(share * sorted.length))] ?? 0;
  return [at(0.5), at(0.05), at(0.95)];
}
