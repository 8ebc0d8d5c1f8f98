import type { Profile } from '../mechanism/profile.ts';
import type { ResponseModel } from '../plant/response-model.ts';
import type { Drive } from './evidence.ts';
import { guessesFrom } from './guess.ts';
import { covarianceOf, type LeastSquaresOptions, leastSquares, sumOfSquares } from './least-squares.ts';
import { leftoverOf } from './leftover.ts';
import { shiftedRows } from './output-error.ts';
import { type Coordinates, decode, placeOf } from './parameters.ts';
import { type Problem, problemOf, residualsOf, type Weighing } from './problem.ts';

/** A fitted model in the coordinates of the fit. */
export interface Fitted {
  readonly problem: Problem;
  readonly weighing: Weighing;
  readonly response: ResponseModel;
  /** The free coordinates, in the order of the problem's. */
  readonly parameters: Float64Array;
  /** Of the free coordinates, entry (i, j) at i·count + j. */
  readonly covariance: Float64Array;
  /** Sum of squares of the residuals, the prior's among them: −2 × ln of the posterior density. */
  readonly cost: number;
}

export interface FitRequest {
  readonly drives: readonly Drive[];
  readonly profile: Profile;
  readonly coordinates: Coordinates;
  readonly rowShift: number;
  /** Models to start from; without any, guesses are made from the records. */
  readonly starts: readonly ResponseModel[];
}

/**
 * Output-error fit of the response model to trials, with the prior as further residuals. A first round counts every row as
 * independent, so that what the prior would pull aside does not pass for a poor model; it tells how large the residuals are
 * and how alike from row to row, and a second round weighs them so.
 */
export function fitModel(request: FitRequest): Fitted {
  const { drives, coordinates } = request;
  const problem = problemOf(drives, request.profile, coordinates, request.rowShift);
  const open: Weighing = { sigma: drives.map((drive) => openSigma(drive)), independence: 1 };
  const first = bestOf(problem, open, startsOf(request, problem));
  // What was learnt before is near enough to be weighed at once.
  const rough = request.starts.length > 0 ? first : refine(problem, open, first);
  const near = weighingAt(problem, rough);
  const nearer = refine(problem, near, bestBreakaway(problem, near, rough));
  return settle(problem, weighingAt(problem, nearer), nearer);
}

/** Fits on from given parameters under given weights, and measures how sure the result is. */
export function settle(problem: Problem, weighing: Weighing, from: Float64Array): Fitted {
  const residuals = residualsOf(problem, weighing);
  const solution = leastSquares(residuals, problem.rows, from, STEPS(problem));
  return {
    problem,
    weighing,
    response: problem.modelAt(solution.parameters),
    parameters: solution.parameters,
    covariance: covarianceOf(solution.jacobian, 1),
    cost: solution.sumOfSquares,
  };
}

const refine = (problem: Problem, weighing: Weighing, from: Float64Array): Float64Array =>
  leastSquares(residualsOf(problem, weighing), problem.rows, from, STEPS(problem)).parameters;

/**
 * The solver is exact, so small steps serve: wide ones straddle stick and slip, and lead out of the valleys between drag, hold and speed.
 */
const STEPS = ({ free, coordinates }: Problem): LeastSquaresOptions => ({
  maxIterations: 40,
  tolerance: 1e-5,
  enough: 1e-3,
  difference: (_, k) => 1e-5 * Math.min(1, coordinates.reach[free[k] ?? 0] ?? 1),
  sides: 'one',
});

/** Before anything is known of the residuals: a fiftieth of the motion's own deviation, or the sensor's floor. */
function openSigma({ measured, floor }: Drive): number {
  let mean = 0;
  for (const value of measured) mean += value / measured.length;
  let squares = 0;
  for (const value of measured) squares += (value - mean) ** 2 / measured.length;
  return Math.max(0.02 * Math.sqrt(squares), floor, 1e-12);
}

/** Size and independence of what a model leaves, trials of one quantity together. */
function weighingAt(problem: Problem, parameters: Float64Array): Weighing {
  const { drives } = problem;
  const answers = problem.answers.of(problem.modelAt(parameters));
  const all = leftoverOf(drives, answers);
  const spreads = new Map<Drive['quantity'], number>();
  for (const quantity of new Set(drives.map((drive) => drive.quantity))) {
    const rows = Array.from(drives.keys()).filter((index) => drives[index]?.quantity === quantity);
    const own = leftoverOf(
      rows.flatMap((index) => drives[index] ?? []),
      rows.flatMap((index) => answers[index] ?? []),
    );
    spreads.set(quantity, own.spread);
  }
  const sigma = drives.map((drive) => Math.max(spreads.get(drive.quantity) ?? 0, leastSigma(drive)));
  return { sigma, independence: all.independence };
}

/** No model is better than this share of the motion's deviation, whatever the sensor. */
const FINEST = 5e-4;

function leastSigma(drive: Drive): number {
  return Math.max(drive.floor, (FINEST / 0.02) * openSigma({ ...drive, floor: 0 }));
}

/** Dead times that starts are guessed for, in periods of the controller. */
const DELAYS = [0, 0.5, 1, 2, 4, 8];

function startsOf(
  { drives, profile, coordinates, rowShift, starts }: FitRequest,
  problem: Problem,
): readonly Float64Array[] {
  const base = decode(coordinates.centre, coordinates.delayBend);
  const { period } = profile.controller;
  const models =
    starts.length > 0
      ? starts
      : guessesFrom(
          drives.map((drive) => ({ ...drive, output: shiftedRows(drive.output, rowShift) })),
          base,
          DELAYS.map((periods) => periods * period),
          profile.kind === 'lift',
        );
  return [base, ...models].map((model) => problem.parametersOf(model));
}

function bestOf(problem: Problem, weighing: Weighing, starts: readonly Float64Array[]): Float64Array {
  const residuals = residualsOf(problem, weighing);
  const into = new Float64Array(problem.rows);
  let best = starts[0] ?? new Float64Array(problem.free.length);
  let least = Number.POSITIVE_INFINITY;
  for (const start of starts) {
    residuals(start, into);
    const cost = sumOfSquares(into);
    if (cost < least) {
      least = cost;
      best = start;
    }
  }
  return best;
}

/** Logarithms of the excess of breakaway over drag that are tried: what it changes comes tick by tick, no slope leads to it. */
const EXCESSES = [-3, -2.2, -1.6, -1.2, -0.8, -0.4, 0, 0.4];

function bestBreakaway(problem: Problem, weighing: Weighing, from: Float64Array): Float64Array {
  if (!problem.free.includes(placeOf('excess'))) return from;
  const model = problem.modelAt(from);
  const others = EXCESSES.map((excess) =>
    problem.parametersOf({ ...model, breakaway: model.drag * (1 + Math.exp(excess)) }),
  );
  return bestOf(problem, weighing, [from, ...others]);
}
