import { EigenvalueDecomposition } from 'ml-matrix';
import { covarianceOf, type Residuals, type Solution } from './least-squares.ts';

/** Steps tried along each axis of the uncertainty, in its own deviations, widest first. */
const STRIDES = [30, 10, 3, 1];

/** Longest step along any axis, in the coordinates' own units. */
const LONGEST = 1.5;

/**
 * Looks around a least-squares solution along the axes of its uncertainty and moves wherever the sum of squares is lower. Stick and
 * slip put kinks into the cost, and a step from derivatives stops at the first one; these steps go over it.
 *
 * @returns the best parameters found; those of the solution when nothing is better
 */
export function exploreAround(residualsOf: Residuals, solution: Solution): Float64Array {
  const { vectors, sizes } = axesOf(solution);
  let best = Float64Array.from(solution.parameters);
  let least = solution.sumOfSquares;
  for (const stride of STRIDES) {
    for (let axis = 0; axis < sizes.length; axis++) {
      const length = Math.min(LONGEST, stride * (sizes[axis] ?? 0));
      for (const sign of [1, -1]) {
        const next = best.map((value, j) => value + sign * length * (vectors[axis]?.[j] ?? 0));
        const sum = sumOfSquares(residualsOf(next));
        if (sum < least) {
          least = sum;
          best = next;
        }
      }
    }
  }
  return best;
}

function axesOf(solution: Solution): {
  readonly vectors: readonly (readonly number[])[];
  readonly sizes: readonly number[];
} {
  const count = solution.parameters.length;
  const variance = Math.max(solution.sumOfSquares / Math.max(1, solution.residuals.length - count), 1e-12);
  const covariance = covarianceOf(solution.triangle, variance);
  const { eigenvectorMatrix, realEigenvalues } = new EigenvalueDecomposition(covariance, { assumeSymmetric: true });
  return {
    vectors: realEigenvalues.map((_, axis) => eigenvectorMatrix.getColumn(axis)),
    sizes: realEigenvalues.map((value) => Math.sqrt(Math.max(0, value))),
  };
}

function sumOfSquares(values: Float64Array): number {
  let sum = 0;
  for (const value of values) sum += value * value;
  return Number.isNaN(sum) ? Number.POSITIVE_INFINITY : sum;
}
