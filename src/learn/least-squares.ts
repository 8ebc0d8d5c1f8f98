import { Matrix, QrDecomposition, SingularValueDecomposition } from 'ml-matrix';
import { reduceColumns, type Triangle } from './householder.ts';

/** Residuals of a problem at given parameters; always the same number of them. */
export type Residuals = (parameters: Float64Array) => Float64Array;

export interface LeastSquaresOptions {
  readonly maxIterations: number;
  /** Stops when the sum of squares or every parameter changes by less than this, relatively. */
  readonly tolerance: number;
  /** Relative step of the central differences; larger for a cost with kinks. */
  readonly difference: number;
  /** Differences to both sides, or to one at half the cost. */
  readonly sides: 'one' | 'both';
  /** Size below which a parameter's step is taken absolutely, one a parameter. */
  readonly typical: readonly number[];
}

export interface Solution {
  readonly parameters: Float64Array;
  readonly residuals: Float64Array;
  /** The Jacobian's triangular factor: as much of it as covariances need. */
  readonly triangle: Triangle;
  readonly sumOfSquares: number;
  readonly iterations: number;
  readonly converged: boolean;
}

/**
 * Nonlinear least squares by Levenberg–Marquardt: steps from the QR factors of the Jacobian with the damping rows under it,
 * each parameter scaled by the largest column norm seen.
 *
 * @throws {RangeError} when the residuals are not finite at the start
 * Source: Moré, "The Levenberg–Marquardt algorithm: implementation and theory", Lecture Notes in Mathematics 630 (1978) 105
 * (scaling); Nielsen's rule for the damping (report IMM-REP-1999-05) (both mem). Held to NIST's certified problems in the tests.
 */
export function leastSquares(residualsOf: Residuals, start: Float64Array, options: LeastSquaresOptions): Solution {
  let parameters = Float64Array.from(start);
  let residuals = residualsOf(parameters).slice();
  let sum = sumOfSquares(residuals);
  if (!Number.isFinite(sum)) throw new RangeError('the residuals at the start are not finite');
  const count = parameters.length;
  const scale = new Float64Array(count);
  let damping = 1e-3;
  let growth = 2;
  let converged = false;
  let iterations = 0;
  let reduced = reduceColumns(jacobianOf(residualsOf, parameters, residuals, options), residuals);
  for (; iterations < options.maxIterations && !converged; iterations++) {
    for (let j = 0; j < count; j++) scale[j] = Math.max(scale[j] ?? 0, columnNorm(reduced.triangle, j), 1e-300);
    let accepted = false;
    for (let attempt = 0; attempt < 25 && !accepted; attempt++) {
      const step = dampedStep(reduced.triangle, reduced.right, scale, damping);
      const next = parameters.map((value, j) => value + (step[j] ?? 0));
      const nextResiduals = residualsOf(next).slice();
      const nextSum = sumOfSquares(nextResiduals);
      const small = parameters.every(
        (value, j) => Math.abs(step[j] ?? 0) <= options.tolerance * (Math.abs(value) + (options.typical[j] ?? 1)),
      );
      if (nextSum <= sum) {
        const promised = promisedGain(reduced.triangle, reduced.right, step);
        const ratio = promised > 0 ? (sum - nextSum) / promised : 1;
        damping *= Math.max(1 / 5, 1 - (2 * ratio - 1) ** 3);
        growth = 2;
        accepted = true;
        converged = small || sum - nextSum <= options.tolerance * options.tolerance * sum;
        parameters = next;
        residuals = nextResiduals;
        sum = nextSum;
      } else {
        if (small) {
          converged = true;
          break;
        }
        damping *= growth;
        growth *= 2;
      }
    }
    if (!accepted) break;
    reduced = reduceColumns(jacobianOf(residualsOf, parameters, residuals, options), residuals);
  }
  return { parameters, residuals, triangle: reduced.triangle, sumOfSquares: sum, iterations, converged };
}

/**
 * Covariance of the parameters: variance · (RᵀR)⁻¹ = variance · (JᵀJ)⁻¹ from the singular values of the column-scaled factor. Scaling
 * first keeps the digits that a pseudo-inverse of JᵀJ loses on badly scaled problems.
 */
export function covarianceOf(triangle: Triangle, variance: number): Matrix {
  const count = triangle.length;
  const norms = Array.from({ length: count }, (_, j) => columnNorm(triangle, j) || 1);
  const scaled = Matrix.zeros(count, count);
  triangle.forEach((column, j) => {
    column.forEach((value, i) => {
      scaled.set(i, j, value / (norms[j] ?? 1));
    });
  });
  const { rightSingularVectors: v, diagonal } = new SingularValueDecomposition(scaled, { autoTranspose: true });
  const result = Matrix.zeros(count, count);
  for (let i = 0; i < count; i++) {
    for (let j = 0; j < count; j++) {
      let sum = 0;
      for (let k = 0; k < count; k++) sum += (v.get(i, k) * v.get(j, k)) / Math.max(diagonal[k] ?? 0, 1e-12) ** 2;
      result.set(i, j, (variance * sum) / ((norms[i] ?? 1) * (norms[j] ?? 1)));
    }
  }
  return result;
}

function sumOfSquares(values: Float64Array): number {
  let sum = 0;
  for (const value of values) sum += value * value;
  return Number.isNaN(sum) ? Number.POSITIVE_INFINITY : sum;
}

function columnNorm(triangle: Triangle, column: number): number {
  let sum = 0;
  for (const value of triangle[column] ?? []) sum += value * value;
  return Math.sqrt(sum);
}

/** Differences, a column a parameter. */
function jacobianOf(
  residualsOf: Residuals,
  at: Float64Array,
  base: Float64Array,
  options: LeastSquaresOptions,
): readonly Float64Array[] {
  const point = Float64Array.from(at);
  return Array.from(at, (value, j) => {
    const h = options.difference * Math.max(Math.abs(value), options.typical[j] ?? 1);
    point[j] = value + h;
    const column = residualsOf(point).slice();
    point[j] = value - h;
    const below = options.sides === 'both' ? residualsOf(point) : base;
    point[j] = value;
    const span = options.sides === 'both' ? 2 * h : h;
    for (let row = 0; row < column.length; row++) column[row] = ((column[row] ?? 0) - (below[row] ?? 0)) / span;
    return column;
  });
}

/** Solves the damped problem on the small factor: √λ·D under R. */
function dampedStep(triangle: Triangle, right: Float64Array, scale: Float64Array, damping: number): Float64Array {
  const count = triangle.length;
  const stacked = Matrix.zeros(2 * count, count);
  const side = Matrix.zeros(2 * count, 1);
  const root = Math.sqrt(damping);
  for (let j = 0; j < count; j++) {
    for (let i = 0; i <= j; i++) stacked.set(i, j, (triangle[j]?.[i] ?? 0) / (scale[j] ?? 1));
    stacked.set(count + j, j, root);
    side.set(j, 0, -(right[j] ?? 0));
  }
  const solution = new QrDecomposition(stacked).solve(side);
  return Float64Array.from({ length: count }, (_, j) => solution.get(j, 0) / (scale[j] ?? 1));
}

/** How much a step should lower the sum of squares if the problem were linear. */
function promisedGain(triangle: Triangle, right: Float64Array, step: Float64Array): number {
  let gain = 0;
  for (let i = 0; i < step.length; i++) {
    let change = 0;
    for (let j = i; j < step.length; j++) change += (triangle[j]?.[i] ?? 0) * (step[j] ?? 0);
    const before = right[i] ?? 0;
    gain += before * before - (before + change) ** 2;
  }
  return gain;
}
