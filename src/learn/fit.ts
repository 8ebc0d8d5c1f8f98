import type { Matrix } from 'ml-matrix';
import type { Profile } from '../mechanism/profile.ts';
import type { ResponseModel } from '../plant/response-model.ts';
import { normalNumbers } from '../trial/chance.ts';
import type { Drive } from './evidence.ts';
import { exploreAround } from './explore.ts';
import type { Prior } from './learnt.ts';
import { covarianceOf, leastSquares } from './least-squares.ts';
import { type Answers, answersTo, fitPercent } from './output-error.ts';
import { decode, encode, type FitParameter, PARAMETERS, priorDeviations } from './parameters.ts';
import { regressedModels } from './regression.ts';

/** A fitted model in the coordinates of the fit. */
export interface Fitted {
  readonly response: ResponseModel;
  /** Coordinates, in the order of PARAMETERS. */
  readonly at: Float64Array;
  /** Covariance of the free coordinates, in the order of `free`. */
  readonly covariance: Matrix;
  readonly free: readonly number[];
  readonly deviations: readonly number[];
  readonly delayScale: number;
  readonly fit: number;
  /** One sigma of what is left, profile unit. */
  readonly residual: number;
  /** What the sensor alone would leave, profile unit. */
  readonly floor: number;
  /** Sum of squares of the residuals without the prior's, for comparing row shifts. */
  readonly misfit: number;
}

/**
 * Output-error fit of the response model to trials: robust (a residual of more than three deviations counts by its size, not
 * its square), with the prior as further residuals, weighed down for residuals that are not independent.
 */
export function fitModel(drives: readonly Drive[], profile: Profile, prior: Prior, rowShift: number): Fitted {
  const delayScale = Math.max(prior.sigma.delay, 1e-6);
  const centre = encode(prior.response, delayScale);
  const deviations = priorDeviations(prior);
  const free = freeParameters(drives, deviations);
  const answers = answersTo(drives, profile, rowShift);
  const floor = noiseFloor(drives, profile);
  const problem = (sigma: number, weight: number) =>
    residualsFor({ drives, answers, centre, deviations, free, delayScale, sigma, weight });
  // First as if every residual counted: what the prior would pull aside must not pass for a poor model.
  const rows = drives.reduce((sum, drive) => sum + drive.time.length, 0);
  const open = problem(5 * floor, 1);
  const starts = bestStarts(
    problem(20 * floor, 1),
    regressedModels(drives, profile, rowShift, prior.response),
    centre,
    free,
    deviations,
    delayScale,
    profile,
    rows < CHEAP_ROWS ? 2 * FOLLOWED : FOLLOWED,
  );
  let rough = starts
    .map((start) => leastSquares(open, start, options(5, free, 0.03, 'one')))
    .reduce((best, next) => (next.sumOfSquares < best.sumOfSquares ? next : best));
  const rounds = rows < CHEAP_ROWS ? 2 * ROUNDS : ROUNDS;
  for (let round = 0; round < rounds; round++) {
    const next = leastSquares(open, exploreAround(open, rough), options(6, free, round % 2 === 0 ? 0.01 : 0.05, 'one'));
    const gained = 1 - next.sumOfSquares / rough.sumOfSquares;
    if (gained > 0) rough = next;
    if (gained < 0.01) break;
  }
  const roughResponse = decodeAt(rough.parameters, centre, deviations, free, delayScale);
  const sigma = Math.max(floor, spreadOf(drives, answers, roughResponse));
  const weight = independence(drives, answers.of(roughResponse));
  const solved = leastSquares(problem(sigma, weight), rough.parameters, options(10, free));
  const response = decodeAt(solved.parameters, centre, deviations, free, delayScale);
  const residual = Math.max(floor, spreadOf(drives, answers, response));
  const scale = (residual / sigma) ** 2;
  return {
    response,
    at: fullCoordinates(solved.parameters, centre, deviations, free),
    covariance: inModelCoordinates(covarianceOf(solved.triangle, Math.max(0.5, scale)), free, deviations, delayScale),
    free,
    deviations,
    delayScale,
    fit: fitPercent(drives, answers.of(response)),
    residual,
    floor,
    misfit: squaredMisfit(drives, answers.of(response)),
  };
}

/** Difference in prior deviations: wide enough to look over the small kinks that stick and slip leave in the cost. */
const options = (
  maxIterations: number,
  free: readonly number[],
  difference = 0.01,
  sides: 'one' | 'both' = 'both',
) => ({
  maxIterations,
  tolerance: 1e-5,
  difference,
  sides,
  typical: free.map(() => 1),
});

/**
 * What no fit is trusted beyond, however little the sensor leaves: machines are not their model to better than this, and a cost
 * with kinks is not solved to better. In ln, output fractions for hold, shares of the prior's deviation for the delay.
 */
const LEAST_DEVIATIONS: Readonly<Record<FitParameter, number>> = {
  topSpeed: 0.008,
  lag: 0.015,
  drag: 0.04,
  excess: 0.15,
  hold: 0.002,
  delay: 0.06,
  oneSided: 0.04,
};

function inModelCoordinates(
  covariance: Matrix,
  free: readonly number[],
  deviations: readonly number[],
  delayScale: number,
): Matrix {
  const scaled = covariance.clone();
  free.forEach((j, k) => {
    scaled.mulRow(k, deviations[j] ?? 1);
    scaled.mulColumn(k, deviations[j] ?? 1);
    const least = (LEAST_DEVIATIONS[PARAMETERS[j] ?? 'lag'] ?? 0) * (PARAMETERS[j] === 'delay' ? delayScale : 1);
    scaled.set(k, k, scaled.get(k, k) + least ** 2);
  });
  return scaled;
}

/** Hold is free where the mechanism has weight; the two directions' drag where the trials went both ways. */
function freeParameters(drives: readonly Drive[], deviations: readonly number[]): readonly number[] {
  const bothWays = movesWay(drives, 1) && movesWay(drives, -1);
  return PARAMETERS.flatMap((name, j) => ((deviations[j] ?? 0) === 0 || (name === 'oneSided' && !bothWays) ? [] : [j]));
}

function movesWay(drives: readonly Drive[], way: number): boolean {
  return drives.some(({ measured }) => {
    const first = measured[0] ?? 0;
    const last = measured.at(-1) ?? 0;
    let farthest = 0;
    for (const value of measured) farthest = Math.max(farthest, Math.abs(value - first));
    return farthest > 0 && Math.sign(last - first) === way && Math.abs(last - first) > 0.5 * farthest;
  });
}

interface Problem {
  readonly drives: readonly Drive[];
  readonly answers: Answers;
  readonly centre: Float64Array;
  readonly deviations: readonly number[];
  readonly free: readonly number[];
  readonly delayScale: number;
  readonly sigma: number;
  /** Share of the residuals that count as independent, 0 to 1. */
  readonly weight: number;
}

function residualsFor(problem: Problem): (parameters: Float64Array) => Float64Array {
  const { drives, answers, centre, deviations, free, delayScale, sigma } = problem;
  const rows = drives.reduce((sum, drive) => sum + drive.time.length, 0);
  const residuals = new Float64Array(rows + free.length);
  const factor = Math.sqrt(problem.weight) / sigma;
  return (parameters) => {
    const answered = answers.of(decodeAt(parameters, centre, deviations, free, delayScale));
    let at = 0;
    drives.forEach((drive, index) => {
      const answer = answered[index];
      for (let row = 0; row < drive.time.length; row++) {
        residuals[at++] = robust(((drive.measured[row] ?? 0) - (answer?.[row] ?? 0)) / sigma) * factor * sigma;
      }
    });
    free.forEach((_, k) => {
      residuals[at++] = parameters[k] ?? 0;
    });
    return residuals;
  };
}

/** Pseudo-Huber: square up to about three deviations, then growing by its size. Huber, Ann. Math. Stat. 35 (1964) 73 (mem). */
function robust(residual: number): number {
  const bend = 3;
  const ratio = residual / bend;
  return Math.sign(residual) * bend * Math.sqrt(2 * (Math.sqrt(1 + ratio * ratio) - 1));
}

/** Rounds of looking around and stepping down. */
const ROUNDS = 4;

/** Candidates drawn from the prior to start from, and how many of the best are followed. */
const CANDIDATES = 60;
const FOLLOWED = 2;

/** Rows under which a record is cheap to simulate, and twice as much is looked at. */
const CHEAP_ROWS = 300;

/**
 * The best few of many places to start from, drawn from the prior: the cost has valleys that a step cannot leave. The same draws
 * every time.
 */
function bestStarts(
  residualsOf: (parameters: Float64Array) => Float64Array,
  regressed: readonly ResponseModel[],
  centre: Float64Array,
  free: readonly number[],
  deviations: readonly number[],
  delayScale: number,
  profile: Profile,
  followed: number,
): readonly Float64Array[] {
  const chance = normalNumbers(20, CANDIDATES * free.length);
  const delays = [0.04, 0.3, 1, 2.5, 6].map(
    (ticks) => encode({ ...decode(centre, delayScale), delay: ticks * profile.controller.period }, delayScale)[5] ?? 0,
  );
  const drawn = Array.from({ length: CANDIDATES }, (_, candidate) =>
    Float64Array.from(free, (j, k) => {
      if (PARAMETERS[j] === 'delay') {
        return ((delays[candidate % delays.length] ?? 0) - (centre[j] ?? 0)) / (deviations[j] ?? 1);
      }
      return (
        (centre[j] ?? 0) + (deviations[j] ?? 0) * (candidate === 0 ? 0 : (chance[candidate * free.length + k] ?? 0))
      );
    }),
  );
  const computed = regressed.map((response) => {
    const at = encode(response, delayScale);
    return Float64Array.from(free, (j) => ((at[j] ?? 0) - (centre[j] ?? 0)) / (deviations[j] ?? 1));
  });
  const tried = [...computed, ...drawn].map((start) => {
    let sum = 0;
    for (const value of residualsOf(start)) sum += value * value;
    return { start, sum: Number.isNaN(sum) ? Number.POSITIVE_INFINITY : sum };
  });
  return tried
    .sort((a, b) => a.sum - b.sum)
    .slice(0, followed)
    .map(({ start }) => start);
}

/** Coordinates of the model from those of the fit, which count in prior deviations from the prior's centre. */
function fullCoordinates(
  parameters: Float64Array,
  centre: Float64Array,
  deviations: readonly number[],
  free: readonly number[],
): Float64Array {
  const at = centre.slice();
  free.forEach((j, k) => {
    at[j] = (centre[j] ?? 0) + (deviations[j] ?? 0) * (parameters[k] ?? 0);
  });
  return at;
}

function decodeAt(
  parameters: Float64Array,
  centre: Float64Array,
  deviations: readonly number[],
  free: readonly number[],
  delayScale: number,
): ResponseModel {
  return decode(fullCoordinates(parameters, centre, deviations, free), delayScale);
}

/** The least that a perfect model would leave: the sensor's step and noise, or a thousandth of the travel. */
function noiseFloor(drives: readonly Drive[], profile: Profile): number {
  let travel = 0;
  for (const { measured } of drives) {
    let low = measured[0] ?? 0;
    let high = low;
    for (const value of measured) {
      low = Math.min(low, value);
      high = Math.max(high, value);
    }
    travel = Math.max(travel, high - low);
  }
  const step = (profile.sensor?.resolution ?? 0) / Math.sqrt(12);
  return Math.max(Math.hypot(step, profile.sensor?.noise ?? 0), 2e-4 * travel, 1e-12);
}

/** Robust deviation of what a model leaves: 1.4826 times the median size, but no less than half the plain one. */
function spreadOf(drives: readonly Drive[], answers: Answers, response: ResponseModel): number {
  const sizes: number[] = [];
  let squares = 0;
  answers.of(response).forEach((answer, index) => {
    const measured = drives[index]?.measured;
    for (let row = 0; row < answer.length; row++) {
      const left = Math.abs((measured?.[row] ?? 0) - (answer[row] ?? 0));
      sizes.push(left);
      squares += left * left;
    }
  });
  sizes.sort((a, b) => a - b);
  const median = sizes[Math.floor(sizes.length / 2)] ?? 0;
  return Math.max(1.4826 * median, 0.5 * Math.sqrt(squares / Math.max(1, sizes.length)));
}

function squaredMisfit(drives: readonly Drive[], answers: readonly Float64Array[]): number {
  let sum = 0;
  answers.forEach((answer, index) => {
    const measured = drives[index]?.measured;
    for (let row = 0; row < answer.length; row++) sum += ((measured?.[row] ?? 0) - (answer[row] ?? 0)) ** 2;
  });
  return sum;
}

/** Share of residuals that count as independent: (1 − ρ)/(1 + ρ) with ρ their correlation from row to row. */
function independence(drives: readonly Drive[], answers: readonly Float64Array[]): number {
  let product = 0;
  let squares = 0;
  answers.forEach((answer, index) => {
    const measured = drives[index]?.measured;
    for (let row = 1; row < answer.length; row++) {
      const before = (measured?.[row - 1] ?? 0) - (answer[row - 1] ?? 0);
      const now = (measured?.[row] ?? 0) - (answer[row] ?? 0);
      product += before * now;
      squares += now * now;
    }
  });
  const correlation = squares > 0 ? Math.max(0, Math.min(0.95, product / squares)) : 0;
  return (1 - correlation) / (1 + correlation);
}
