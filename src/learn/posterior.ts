import type { ResponseModel } from '../plant/response-model.ts';
import { normalNumbers } from '../trial/chance.ts';
import { type Fitted, settle } from './fit.ts';
import { sumOfSquares } from './least-squares.ts';
import { choleskyOf, momentsOf, type Spread } from './moments.ts';
import { decode, type FitParameter, logStretch, PARAMETERS } from './parameters.ts';
import { type Problem, residualsOf } from './problem.ts';

/** Models that the trials support, each with its share of the belief. */
export interface Posterior {
  readonly fitted: Fitted;
  readonly models: readonly ResponseModel[];
  /** Their shares; together 1. */
  readonly shares: Float64Array;
  /** Their places in the prior's coordinates. */
  readonly places: readonly Float64Array[];
}

/** Candidates of the first and of the second round. */
const ROUNDS = [96, 160] as const;

/** Degrees of freedom of the candidates' distribution: tails longer than the posterior's, so that no share runs away. */
const FREEDOM = 6;

/** A candidate this much better (in −2 ln density) shows that the fit had stopped short. */
const SHORT_STOP = 0.5;

/**
 * Weighs candidates about the fit by how well they truly explain the trials: friction bounds what may be on one side only (what
 * did move was not held), which no covariance says. Importance sampling in two rounds, the second about what the first found, the
 * rounds weighed as one mixture: Owen & Zhou, "Safe and effective importance sampling", J. Am. Stat. Assoc. 95 (2000) 135 (mem).
 *
 * @param seed the same seed gives the same candidates
 */
export function posteriorOf(first: Fitted, seed: number): Posterior {
  let fitted = first;
  for (let retry = 0; retry < 2; retry++) {
    const found = explore(fitted, seed);
    const better = found.costs.reduce((best, cost, at) => (cost < (found.costs[best] ?? 0) ? at : best), 0);
    const at = found.candidates[better];
    if (at === undefined || (found.costs[better] ?? 0) > fitted.cost - SHORT_STOP)
      return posteriorFrom(fitted, found, seed);
    const next = settle(fitted.problem, fitted.weighing, at);
    if (next.cost >= fitted.cost - SHORT_STOP) return posteriorFrom(fitted, found, seed);
    fitted = next;
  }
  return posteriorFrom(fitted, explore(fitted, seed), seed);
}

interface Found {
  readonly candidates: readonly Float64Array[];
  readonly costs: readonly number[];
  readonly shares: Float64Array;
}

function explore({ problem, weighing, parameters, covariance, cost: least }: Fitted, seed: number): Found {
  const residuals = residualsOf(problem, weighing);
  const into = new Float64Array(problem.rows);
  const candidates: Float64Array[] = [];
  const costs: number[] = [];
  const spreads: Spread[] = [];
  let spread: Spread = { centre: parameters, lower: choleskyOf(covariance, parameters.length) };
  let shares: Float64Array = new Float64Array(0);
  ROUNDS.forEach((count, round) => {
    spreads.push(spread);
    for (const candidate of candidatesFrom(spread, count, seed + round)) {
      candidates.push(candidate);
      residuals(candidate, into);
      costs.push(sumOfSquares(into));
    }
    shares = sharesOf(problem, candidates, costs, spreads, least);
    spread = momentsOf(candidates, shares, covariance);
  });
  return { candidates, costs, shares };
}

function candidatesFrom({ centre, lower }: Spread, count: number, seed: number): readonly Float64Array[] {
  const size = centre.length;
  const chance = normalNumbers(seed, count * (size + FREEDOM));
  return Array.from({ length: count }, (_, draw) => {
    const own = chance.subarray(draw * (size + FREEDOM), (draw + 1) * (size + FREEDOM));
    let squares = 0;
    for (let k = size; k < own.length; k++) squares += (own[k] ?? 0) ** 2;
    const stretch = Math.sqrt(FREEDOM / squares);
    return centre.map((value, row) => {
      let sum = 0;
      for (let k = 0; k <= row; k++) sum += (lower[row * size + k] ?? 0) * (own[k] ?? 0);
      return value + stretch * sum;
    });
  });
}

/** Shares ∝ density over the mixture that the candidates came from. */
function sharesOf(
  problem: Problem,
  candidates: readonly Float64Array[],
  costs: readonly number[],
  spreads: readonly Spread[],
  least: number,
): Float64Array {
  const whole = spreads.reduce((sum, _, round) => sum + (ROUNDS[round] ?? 0), 0);
  const shares = Float64Array.from(candidates, (candidate, at) => {
    let mixture = 0;
    spreads.forEach((spread, round) => {
      mixture += ((ROUNDS[round] ?? 0) / whole) * densityAt(spread, candidate);
    });
    const cost = costs[at] ?? Number.POSITIVE_INFINITY;
    return Math.exp(-0.5 * (cost - least) + logStretch(problem.straightAt(candidate))) / mixture;
  });
  const sum = shares.reduce((total, share) => total + share, 0);
  return shares.map((share) => share / sum);
}

/** Density of Student's distribution at a point, but for a factor that is the same everywhere. */
function densityAt({ centre, lower }: Spread, at: Float64Array): number {
  const size = centre.length;
  const solved = new Float64Array(size);
  let squares = 0;
  let volume = 1;
  for (let row = 0; row < size; row++) {
    let sum = (at[row] ?? 0) - (centre[row] ?? 0);
    for (let k = 0; k < row; k++) sum -= (lower[row * size + k] ?? 0) * (solved[k] ?? 0);
    const diagonal = lower[row * size + row] ?? 1;
    solved[row] = sum / diagonal;
    squares += (solved[row] ?? 0) ** 2;
    volume *= diagonal;
  }
  return (1 + squares / FREEDOM) ** (-0.5 * (FREEDOM + size)) / volume;
}

/**
 * What no record is trusted beyond, however little the sensor leaves: machines are not their model to better than this, nor the
 * same from one day to the next. In the prior's coordinates; common practice, no source.
 */
const LEAST_DEVIATIONS: Readonly<Record<FitParameter, number>> = {
  topSpeed: 0.008,
  lag: 0.015,
  drag: 0.04,
  excess: 0.15,
  hold: 0.002,
  delay: 0.2,
  oneSided: 0.04,
};

/** Models of the candidates, each off by what no record is trusted beyond; what was not free is drawn from the prior. */
function posteriorFrom(fitted: Fitted, { candidates, shares }: Found, seed: number): Posterior {
  const { problem } = fitted;
  const { deviations, delayBend } = problem.coordinates;
  const size = PARAMETERS.length;
  const chance = normalNumbers(seed + ROUNDS.length, candidates.length * size);
  const places = candidates.map((candidate, draw) =>
    problem.placeAt(candidate).map((value, j) => {
      const whole = deviations[j] ?? 0;
      const off = problem.free.includes(j) ? Math.min(whole, LEAST_DEVIATIONS[PARAMETERS[j] ?? 'lag']) : whole;
      return value + off * (chance[draw * size + j] ?? 0);
    }),
  );
  const models = places.map((place) => decode(place, delayBend));
  return { fitted, models, shares, places };
}

/**
 * Equal draws from a posterior, by systematic resampling: a model's count is its share of the draws, rounded up or down. Kitagawa,
 * J. Comput. Graph. Stat. 5 (1996) 1 (mem).
 */
export function drawsFrom({ models, shares }: Posterior, count: number): readonly ResponseModel[] {
  const draws: ResponseModel[] = [];
  let reached = 0;
  models.forEach((model, at) => {
    reached += shares[at] ?? 0;
    while (draws.length < count && (draws.length + 0.5) / count <= reached) draws.push(model);
  });
  const last = draws.at(-1) ?? models[0];
  while (draws.length < count && last) draws.push(last);
  return draws;
}
