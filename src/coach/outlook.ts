import type { Gains } from '../controller/settings.ts';
import type { Profile } from '../mechanism/profile.ts';
import type { ResponseModel } from '../plant/response-model.ts';
import { derivativeCandidates, integralVariants, proportionalCandidates } from './candidates.ts';
import type { Draw } from './draws.ts';
import { type Ground, type Score, scoreOf } from './evaluate.ts';
import { carryingTerms, kdLimit } from './scales.ts';
import { bestOf, clampGains, type Found, type Freed, type GainBounds, refine } from './search.ts';

/** A set of gains that a search ended on, with how it does over the draws. */
export interface Choice {
  readonly gains: Gains;
  readonly score: Score;
}

/** How much work a search may do; smaller for plants that have no closed form. */
export interface Effort {
  readonly grid: number;
  /** Draws used while refining, and to rank the finalists. */
  readonly few: number;
  readonly many: number;
}

export const FULL_EFFORT: Effort = { grid: 14, few: 5, many: 24 };
export const THRIFTY_EFFORT: Effort = { grid: 9, few: 2, many: 8 };

/** What a search is made on. The first draw is the best estimate. */
export interface SearchGround {
  readonly ground: Ground;
  readonly draws: readonly Draw[];
  readonly effort: Effort;
}

/**
 * The best gains that the freed terms allow, inside the bounds.
 *
 * A space-filling set on the best estimate; the best few refined over a few draws; the finalists ranked over many.
 */
function searchFrom(candidates: readonly Gains[], freed: Freed, bounds: GainBounds, search: SearchGround): Choice {
  const { ground, draws, effort } = search;
  const on = (count: number) => (gains: Gains) => scoreOf(gains, draws.slice(0, count), ground).cost;
  const inside = candidates.map((gains) => clampGains(gains, bounds));
  const coarse = bestOf(inside, on(1), 3);
  const few = on(effort.few);
  const finalists = coarse
    .map((found): Found => ({ gains: found.gains, cost: few(found.gains) }))
    .sort((a, b) => a.cost - b.cost)
    .slice(0, 2)
    .map((found) => refine(found, few, { freed, bounds, firstStep: 0.4, lastStep: 0.06 }));
  const ranked = finalists
    .map((found) => ({ gains: found.gains, score: scoreOf(found.gains, draws.slice(0, effort.many), ground) }))
    .sort((a, b) => a.score.cost - b.score.cost);
  const best = ranked[0];
  if (!best) throw new RangeError('a search needs at least one candidate');
  return best;
}

/** Everything free: where the run is heading. Tries without an integral first and keeps it off unless it pays. */
export function searchAll(response: ResponseModel, profile: Profile, bounds: GainBounds, search: SearchGround): Choice {
  const plain = derivativeCandidates(response, profile, search.effort.grid);
  const withoutIntegral = searchFrom(plain, ['kp', 'kd'], bounds, search);
  // An integral costs a stage and can hunt: it has to buy a met target, or a fifth of the settling time.
  if (withoutIntegral.score.meets >= 0.9) return withoutIntegral;
  const seeds = bestOf(
    plain.map((gains) => clampGains(gains, bounds)),
    (gains) => scoreOf(gains, search.draws.slice(0, 1), search.ground).cost,
    5,
  );
  const variants = [withoutIntegral.gains, ...seeds.map((seed) => seed.gains)].flatMap((gains) =>
    integralVariants(gains, response, profile),
  );
  const withIntegral = searchFrom(variants, ['kp', 'ki', 'kd', 'zone'], bounds, search);
  return withIntegral.score.cost < 0.85 * withoutIntegral.score.cost ? withIntegral : withoutIntegral;
}

/** P alone, on top of what carries the load. */
export function searchProportional(
  response: ResponseModel,
  profile: Profile,
  bounds: GainBounds,
  search: SearchGround,
): Choice {
  return searchFrom(proportionalCandidates(response, profile, 2 * search.effort.grid), ['kp'], bounds, search);
}

/** Ki and its zone, with Kp and Kd as they are. */
export function searchIntegral(
  gains: Gains,
  response: ResponseModel,
  profile: Profile,
  bounds: GainBounds,
  search: SearchGround,
): Choice {
  const start = { ...gains, ...carryingTerms(response, profile) };
  const own = gains.ki > 0 ? [start] : [];
  return searchFrom([...own, ...integralVariants(start, response, profile)], ['ki', 'zone'], bounds, search);
}

/** Bounds that hold whatever trust says: the sensor's resolution bounds Kd. */
export function widestBounds(profile: Profile): GainBounds {
  const free: readonly [number, number] = [0, Number.POSITIVE_INFINITY];
  return {
    kp: free,
    ki: free,
    kd: [0, kdLimit(profile)],
    zone: [profile.target.tolerance * 0.2, Number.POSITIVE_INFINITY],
  };
}

/** The tighter of two boxes. */
export function intersect(a: GainBounds, b: GainBounds): GainBounds {
  const both = (x: readonly [number, number], y: readonly [number, number]): readonly [number, number] => {
    const high = Math.min(x[1], y[1]);
    return [Math.min(high, Math.max(x[0], y[0])), high];
  };
  return { kp: both(a.kp, b.kp), ki: both(a.ki, b.ki), kd: both(a.kd, b.kd), zone: both(a.zone, b.zone) };
}
