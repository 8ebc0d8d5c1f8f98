import { Matrix, QrDecomposition, SingularValueDecomposition } from 'ml-matrix';

/** Residuals of a problem at given parameters; always the same number of them. */
export type Residuals = (parameters: Float64Array) => Float64Array;

export interface LeastSquaresOptions {
  readonly maxIterations: number;
  /** Stops when the sum of squares or every parameter changes by less than this, relatively. */
  readonly tolerance: number;
  /** Relative step of the central differences; larger for a cost with kinks. */
  readonly difference: number;
  /** Size below which a parameter's step is taken absolutely, one a parameter. */
  readonly typical: readonly number[];
}

export interface Solution {
  readonly parameters: Float64Array;
  readonly residuals: Float64Array;
  /** Rows = residuals, columns = parameters. */
  readonly jacobian: Matrix;
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
  let residuals = residualsOf(parameters);
  let sum = sumOfSquares(residuals);
  if (!Number.isFinite(sum)) throw new RangeError('the residuals at the start are not finite');
  const count = parameters.length;
  const scale = new Float64Array(count);
  let damping = 1e-3;
  let growth = 2;
  let converged = false;
  let iterations = 0;
  let jacobian = jacobianOf(residualsOf, parameters, residuals.length, options);
  for (; iterations < options.maxIterations && !converged; iterations++) {
    for (let j = 0; j < count; j++) scale[j] = Math.max(scale[j] ?? 0, columnNorm(jacobian, j), 1e-300);
    let accepted = false;
    for (let attempt = 0; attempt < 25 && !accepted; attempt++) {
      const step = dampedStep(jacobian, residuals, scale, damping);
      const next = parameters.map((value, j) => value + (step[j] ?? 0));
      const nextResiduals = residualsOf(next);
      const nextSum = sumOfSquares(nextResiduals);
      const small = parameters.every(
        (value, j) => Math.abs(step[j] ?? 0) <= options.tolerance * (Math.abs(value) + (options.typical[j] ?? 1)),
      );
      if (nextSum <= sum) {
        const promised = promisedGain(jacobian, residuals, step);
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
    jacobian = jacobianOf(residualsOf, parameters, residuals.length, options);
  }
  return { parameters, residuals, jacobian, sumOfSquares: sum, iterations, converged };
}

/**
 * Covariance of the parameters: variance · (JᵀJ)⁻¹ from the singular values of the column-scaled Jacobian. Scaling first
 * keeps the digits that a pseudo-inverse of JᵀJ loses on badly scaled problems.
 */
export function covarianceOf(jacobian: Matrix, variance: number): Matrix {
  const count = jacobian.columns;
  const norms = Array.from({ length: count }, (_, j) => columnNorm(jacobian, j) || 1);
  const scaled = jacobian.clone();
  for (let j = 0; j < count; j++) scaled.mulColumn(j, 1 / (norms[j] ?? 1));
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

function columnNorm(matrix: Matrix, column: number): number {
  let sum = 0;
  for (let row = 0; row < matrix.rows; row++) sum += matrix.get(row, column) ** 2;
  return Math.sqrt(sum);
}

function jacobianOf(residualsOf: Residuals, at: Float64Array, rows: number, options: LeastSquaresOptions): Matrix {
  const jacobian = Matrix.zeros(rows, at.length);
  const point = Float64Array.from(at);
  for (let j = 0; j < at.length; j++) {
    const value = at[j] ?? 0;
    const h = options.difference * Math.max(Math.abs(value), options.typical[j] ?? 1);
    point[j] = value + h;
    const above = residualsOf(point).slice();
    point[j] = value - h;
    const below = residualsOf(point);
    point[j] = value;
    for (let row = 0; row < rows; row++) jacobian.set(row, j, ((above[row] ?? 0) - (below[row] ?? 0)) / (2 * h));
  }
  return jacobian;
}

function dampedStep(jacobian: Matrix, residuals: Float64Array, scale: Float64Array, damping: number): Float64Array {
  const rows = jacobian.rows;
  const count = jacobian.columns;
  const stacked = Matrix.zeros(rows + count, count);
  const right = Matrix.zeros(rows + count, 1);
  for (let row = 0; row < rows; row++) {
    for (let j = 0; j < count; j++) stacked.set(row, j, jacobian.get(row, j) / (scale[j] ?? 1));
    right.set(row, 0, -(residuals[row] ?? 0));
  }
  const root = Math.sqrt(damping);
  for (let j = 0; j < count; j++) stacked.set(rows + j, j, root);
  const solution = new QrDecomposition(stacked).solve(right);
  return Float64Array.from({ length: count }, (_, j) => solution.get(j, 0) / (scale[j] ?? 1));
}

function promisedGain(jacobian: Matrix, residuals: Float64Array, step: Float64Array): number {
  let gain = 0;
  for (let row = 0; row < jacobian.rows; row++) {
    let change = 0;
    for (let j = 0; j < step.length; j++) change += jacobian.get(row, j) * (step[j] ?? 0);
    const before = residuals[row] ?? 0;
    gain += before * before - (before + change) ** 2;
  }
  return gain;
}
