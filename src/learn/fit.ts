import type { Matrix } from 'ml-matrix';
import type { Profile } from '../mechanism/profile.ts';
import type { ResponseModel } from '../plant/response-model.ts';
import type { Drive } from './evidence.ts';
import { exploreAround } from './explore.ts';
import type { Prior } from './learnt.ts';
import { covarianceOf, leastSquares } from './least-squares.ts';
import { type Answers, answersTo, fitPercent } from './output-error.ts';
import { decode, encode, PARAMETERS, priorDeviations } from './parameters.ts';

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
  const first = bestStart(problem(20 * floor, 1), centre, free, deviations, delayScale, profile);
  // First as if every residual counted: what the prior would pull aside must not pass for a poor model.
  const open = problem(5 * floor, 1);
  const near = leastSquares(open, first, options(14, free, deviations));
  const rough = leastSquares(open, exploreAround(open, near), options(10, free, deviations));
  const roughResponse = decodeAt(rough.parameters, centre, free, delayScale);
  const sigma = Math.max(floor, spreadOf(drives, answers, roughResponse));
  const weight = independence(drives, answers.of(roughResponse));
  const solved = leastSquares(problem(sigma, weight), rough.parameters, options(18, free, deviations));
  const response = decodeAt(solved.parameters, centre, free, delayScale);
  const residual = Math.max(floor, spreadOf(drives, answers, response));
  const scale = (residual / sigma) ** 2;
  return {
    response,
    at: fullCoordinates(solved.parameters, centre, free),
    covariance: covarianceOf(solved.jacobian, Math.max(0.5, scale)),
    free,
    deviations,
    delayScale,
    fit: fitPercent(drives, answers.of(response)),
    residual,
    floor,
    misfit: squaredMisfit(drives, answers.of(response)),
  };
}

const options = (maxIterations: number, free: readonly number[], deviations: readonly number[]) => ({
  maxIterations,
  tolerance: 1e-5,
  difference: 2e-3,
  typical: free.map((j) => Math.min(1, deviations[j] ?? 1)),
});

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
    const answered = answers.of(decodeAt(parameters, centre, free, delayScale));
    let at = 0;
    drives.forEach((drive, index) => {
      const answer = answered[index];
      for (let row = 0; row < drive.time.length; row++) {
        residuals[at++] = robust(((drive.measured[row] ?? 0) - (answer?.[row] ?? 0)) / sigma) * factor * sigma;
      }
    });
    free.forEach((j, k) => {
      residuals[at++] = ((parameters[k] ?? 0) - (centre[j] ?? 0)) / (deviations[j] ?? 1);
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

/** The best of a few dead times and speeds to start from: the cost has valleys that a step cannot leave. */
function bestStart(
  residualsOf: (parameters: Float64Array) => Float64Array,
  centre: Float64Array,
  free: readonly number[],
  deviations: readonly number[],
  delayScale: number,
  profile: Profile,
): Float64Array {
  const base = Float64Array.from(free, (j) => centre[j] ?? 0);
  const wide = (deviations[0] ?? 0) > 0.8;
  const delayAt = free.indexOf(PARAMETERS.indexOf('delay'));
  const speedAt = free.indexOf(PARAMETERS.indexOf('topSpeed'));
  const lagAt = free.indexOf(PARAMETERS.indexOf('lag'));
  let best = base;
  let least = Number.POSITIVE_INFINITY;
  for (const delay of [0.04, 0.6, 2, 6]) {
    for (const speed of wide ? [-1.4, -0.7, 0, 0.7, 1.4] : [-0.3, 0, 0.3]) {
      for (const lag of wide ? [-1, 0, 1] : [-0.3, 0.3]) {
        const start = base.slice();
        if (delayAt >= 0)
          start[delayAt] =
            encode({ ...decode(centre, delayScale), delay: delay * profile.controller.period }, delayScale)[5] ?? 0;
        if (speedAt >= 0) start[speedAt] = (start[speedAt] ?? 0) + speed;
        if (lagAt >= 0) start[lagAt] = (start[lagAt] ?? 0) + lag;
        let sum = 0;
        for (const value of residualsOf(start)) sum += value * value;
        if (sum < least) {
          least = sum;
          best = start;
        }
      }
    }
  }
  return best;
}

function fullCoordinates(parameters: Float64Array, centre: Float64Array, free: readonly number[]): Float64Array {
  const at = centre.slice();
  free.forEach((j, k) => {
    at[j] = parameters[k] ?? 0;
  });
  return at;
}

function decodeAt(
  parameters: Float64Array,
  centre: Float64Array,
  free: readonly number[],
  delayScale: number,
): ResponseModel {
  return decode(fullCoordinates(parameters, centre, free), delayScale);
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
