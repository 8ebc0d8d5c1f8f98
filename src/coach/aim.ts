import type { Profile } from '../mechanism/profile.ts';
import { lastOf, type Situation } from './situation.ts';

/** What a search aims at: the target with the reserve that the trials so far ask for. */
export interface Aim {
  /** Profile unit. */
  readonly tolerance: number;
  /** %. */
  readonly overshoot: number;
  /** s. */
  readonly settlingTime: number;
  /** s to simulate. */
  readonly duration: number;
}

/** Share of the target kept in reserve at first, and after each trial at full stretch that missed it. */
const RESERVE = 0.12;
const RESERVE_PER_MISS = 0.12;

/**
 * The target with reserve: a model that was promised a met target and missed it earns a tighter aim.
 */
export function aimOf(situation: Situation): Aim {
  const { target } = situation.profile;
  const misses = situation.readings.filter((reading, index) => {
    const stage = situation.history.trials[index]?.stage;
    return !reading.meets && (stage === 'derivative' || stage === 'proof');
  }).length;
  const reserve = Math.min(0.5, RESERVE + RESERVE_PER_MISS * misses);
  const overshotLast = lastOf(situation)?.reading.verdicts.some((verdict) => verdict.is === 'overshoots') ?? false;
  return {
    tolerance: target.tolerance * (1 - reserve / 2),
    overshoot: target.overshoot * (1 - reserve) * (overshotLast ? 0.7 : 1),
    settlingTime: target.settlingTime * (1 - reserve),
    duration: rehearsalDuration(situation.profile),
  };
}

/** How long a trial is recorded and rehearsed, s: long enough to see it settle, rest, and start to hunt. */
export function rehearsalDuration(profile: Profile): number {
  const settle = profile.target.settlingTime;
  return Math.min(20, Math.max(1.2, 2.5 * settle + 0.6));
}
