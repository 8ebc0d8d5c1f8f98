import { backSubstitute, type Columns, inverseOf, newColumns, type Triangle, triangulate } from './qr.ts';

/** Writes the residuals at `parameters` into a column. A value that is not finite marks parameters that cannot be. */
export type Residuals = (parameters: Float64Array, into: Float64Array) => void;

export interface LeastSquaresOptions {
  readonly maxIterations: number;
  /** Stops when the sum of squares falls by less than this share of itself, or a step promises no more. */
  readonly tolerance: number;
  /** A fall of the sum of squares that is not worth another round, either; 0 = go on. */
  readonly enough: number;
  /** Step of the differences in parameter `j` at `value`. */
  readonly difference: (value: number, j: number) => number;
  /** Two-sided differences cost twice as much; they are exact to the second order. */
  readonly sides: 'one' | 'two';
}

export interface Solution {
  readonly parameters: Float64Array;
  readonly residuals: Float64Array;
  readonly jacobian: Columns;
  readonly sumOfSquares: number;
  readonly iterations: number;
  readonly converged: boolean;
}

const MOST_ATTEMPTS = 20;

/**
 * Nonlinear least squares by Levenberg–Marquardt. The Jacobian is triangulated once a round, its columns scaled by the largest
 * norm that each had; trying another damping costs only a solve of the size of the parameters.
 *
 * @param rows number of residuals
 * @throws {RangeError} when the residuals are not finite at the start
 * Source: Moré, "The Levenberg–Marquardt algorithm: implementation and theory", Lecture Notes in Mathematics 630 (1978) 105
 * (scaling); Nielsen, report IMM-REP-1999-05 (damping) (both mem). Held to NIST's certified problems in the tests.
 */
export function leastSquares(
  residualsOf: Residuals,
  rows: number,
  start: Float64Array,
  options: LeastSquaresOptions,
): Solution {
  let parameters = Float64Array.from(start);
  let residuals = new Float64Array(rows);
  let spare = new Float64Array(rows);
  residualsOf(parameters, residuals);
  let sum = sumOfSquares(residuals);
  if (sum === Number.POSITIVE_INFINITY) throw new RangeError('the residuals are not finite at the start of the fit');
  const norms = new Float64Array(parameters.length);
  const jacobian = newColumns(rows, parameters.length);
  let damping = 1e-3;
  let growth = 2;
  let converged = false;
  let iterations = 0;
  differentiate(jacobian, residualsOf, parameters, residuals, options);
  while (iterations < options.maxIterations && !converged) {
    iterations++;
    const triangle = scaledTriangle(jacobian, residuals, norms);
    let accepted = false;
    for (let attempt = 0; attempt < MOST_ATTEMPTS && !accepted && !converged; attempt++) {
      const scaledStep = dampedStep(triangle, damping);
      const promised = promisedFall(triangle, scaledStep);
      const next = parameters.map((value, j) => value + (scaledStep[j] ?? 0) / (norms[j] || 1));
      residualsOf(next, spare);
      const nextSum = sumOfSquares(spare);
      const negligible = Math.max(options.enough, options.tolerance * sum);
      if (nextSum < sum) {
        const ratio = promised > 0 ? (sum - nextSum) / promised : 1;
        damping = Math.max(1e-15, damping * Math.max(1 / 5, 1 - (2 * ratio - 1) ** 3));
        growth = 2;
        accepted = true;
        converged = sum - nextSum <= negligible && promised <= 2 * negligible;
        parameters = next;
        [residuals, spare] = [spare, residuals];
        sum = nextSum;
      } else {
        converged = promised <= negligible;
        damping *= growth;
        growth *= 2;
      }
    }
    if (accepted) differentiate(jacobian, residualsOf, parameters, residuals, options);
    else break;
  }
  return { parameters, residuals, jacobian, sumOfSquares: sum, iterations, converged };
}

/**
 * Covariance of the parameters, entry (i, j) at i·count + j: variance · (JᵀJ)⁻¹ from the triangle of the column-scaled Jacobian.
 * Scaling first keeps the digits that a pseudo-inverse of JᵀJ loses on badly scaled problems.
 */
export function covarianceOf(jacobian: Columns, variance: number): Float64Array {
  const { count } = jacobian;
  const norms = new Float64Array(count);
  const inverse = inverseOf(scaledTriangle(jacobian, new Float64Array(jacobian.rows), norms));
  const covariance = new Float64Array(count * count);
  for (let i = 0; i < count; i++) {
    for (let j = 0; j < count; j++) {
      let sum = 0;
      for (let k = Math.max(i, j); k < count; k++) sum += (inverse[i * count + k] ?? 0) * (inverse[j * count + k] ?? 0);
      covariance[i * count + j] = (variance * sum) / ((norms[i] || 1) * (norms[j] || 1));
    }
  }
  return covariance;
}

/** Jacobian of the residuals by differences, into `jacobian`. */
function differentiate(
  jacobian: Columns,
  residualsOf: Residuals,
  at: Float64Array,
  residuals: Float64Array,
  options: Pick<LeastSquaresOptions, 'difference' | 'sides'>,
): void {
  const { rows, count, values } = jacobian;
  const point = Float64Array.from(at);
  const below = options.sides === 'two' ? new Float64Array(rows) : residuals;
  for (let j = 0; j < count; j++) {
    const value = at[j] ?? 0;
    const h = options.difference(value, j);
    const column = values.subarray(j * rows, (j + 1) * rows);
    point[j] = value + h;
    const above = point[j] ?? 0;
    residualsOf(point, column);
    if (options.sides === 'two') {
      point[j] = value - h;
      residualsOf(point, below);
    }
    // What was truly added, after rounding.
    const width = above - (options.sides === 'two' ? (point[j] ?? 0) : value);
    point[j] = value;
    for (let row = 0; row < rows; row++) column[row] = ((column[row] ?? 0) - (below[row] ?? 0)) / width;
  }
}

export function sumOfSquares(values: Float64Array): number {
  let sum = 0;
  for (let at = 0; at < values.length; at++) sum += (values[at] ?? 0) ** 2;
  return Number.isNaN(sum) ? Number.POSITIVE_INFINITY : sum;
}

/** Raises `norms` to the Jacobian's column norms, and triangulates the columns over them against the residuals turned over. */
function scaledTriangle({ rows, count, values }: Columns, residuals: Float64Array, norms: Float64Array): Triangle {
  const scaled = values.slice();
  for (let j = 0; j < count; j++) {
    norms[j] = Math.max(norms[j] ?? 0, Math.sqrt(sumOfSquares(values.subarray(j * rows, (j + 1) * rows))));
    const factor = 1 / (norms[j] || 1);
    for (let at = j * rows; at < (j + 1) * rows; at++) scaled[at] = (scaled[at] ?? 0) * factor;
  }
  return triangulate(
    { rows, count, values: scaled },
    residuals.map((value) => -value),
  );
}

/** Step in scaled parameters: least squares of the triangle with √damping under it. */
function dampedStep(triangle: Triangle, damping: number): Float64Array {
  const { count, values, turned } = triangle;
  const stacked = newColumns(2 * count, count);
  const right = new Float64Array(2 * count);
  right.set(turned);
  for (let j = 0; j < count; j++) {
    for (let i = 0; i <= j; i++) stacked.values[j * 2 * count + i] = values[i * count + j] ?? 0;
    stacked.values[j * 2 * count + count + j] = Math.sqrt(damping);
  }
  const damped = triangulate(stacked, right);
  return backSubstitute(damped, damped.turned);
}

/** Fall of the sum of squares that the linear model promises for a step. */
function promisedFall({ count, values, turned }: Triangle, step: Float64Array): number {
  let fall = 0;
  for (let i = 0; i < count; i++) {
    let reached = 0;
    for (let j = i; j < count; j++) reached += (values[i * count + j] ?? 0) * (step[j] ?? 0);
    const wanted = turned[i] ?? 0;
    fall += wanted * wanted - (wanted - reached) ** 2;
  }
  return fall;
}
