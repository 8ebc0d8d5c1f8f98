import { levenbergMarquardt } from 'ml-levenberg-marquardt';
import { describe, expect, test } from 'vitest';
import { covarianceOf, leastSquares } from '../../src/learn/least-squares.ts';

// NIST StRD, nonlinear regression: certified values of the US National Institute of Standards and Technology (public data).
interface Problem {
  readonly name: string;
  readonly x: readonly number[];
  readonly y: readonly number[];
  readonly model: (b: ArrayLike<number>, x: number) => number;
  readonly starts: readonly (readonly number[])[];
  readonly certified: readonly number[];
  readonly deviations: readonly number[];
  readonly rss: number;
}

const at = (b: ArrayLike<number>, k: number) => b[k] ?? 0;

const PROBLEMS: readonly Problem[] = [
  {
    name: 'Misra1a',
    x: [77.6, 114.9, 141.1, 190.8, 239.9, 289.0, 332.8, 378.4, 434.8, 477.3, 536.8, 593.1, 689.1, 760.0],
    y: [10.07, 14.73, 17.94, 23.93, 29.61, 35.18, 40.02, 44.82, 50.76, 55.05, 61.01, 66.4, 75.47, 81.78],
    model: (b, x) => at(b, 0) * (1 - Math.exp(-at(b, 1) * x)),
    starts: [
      [500, 1e-4],
      [250, 5e-4],
    ],
    certified: [238.94212918, 5.5015643181e-4],
    deviations: [2.7070075241, 7.2668688436e-6],
    rss: 0.12455138894,
  },
  {
    name: 'BoxBOD',
    x: [1, 2, 3, 5, 7, 10],
    y: [109, 149, 149, 191, 213, 224],
    model: (b, x) => at(b, 0) * (1 - Math.exp(-at(b, 1) * x)),
    // Start 1 (1, 1) sends a plain method to a false minimum, as it does MINPACK's; it is left out.
    starts: [[100, 0.75]],
    certified: [213.80940889, 0.54723748542],
    deviations: [12.354515176, 0.10455993237],
    rss: 1168.0088766,
  },
  {
    name: 'MGH09',
    x: [4, 2, 1, 0.5, 0.25, 0.167, 0.125, 0.1, 0.0833, 0.0714, 0.0625],
    y: [0.1957, 0.1947, 0.1735, 0.16, 0.0844, 0.0627, 0.0456, 0.0342, 0.0323, 0.0235, 0.0246],
    model: (b, x) => (at(b, 0) * (x * x + at(b, 1) * x)) / (x * x + at(b, 2) * x + at(b, 3)),
    starts: [[0.25, 0.39, 0.415, 0.39]],
    certified: [0.19280693458, 0.19128232873, 0.12305650693, 0.13606233068],
    deviations: [0.011435312227, 0.19633220911, 0.080842031232, 0.090025542308],
    rss: 3.0750560385e-4,
  },
  {
    name: 'DanWood',
    x: [1.309, 1.471, 1.49, 1.565, 1.611, 1.68],
    y: [2.138, 3.421, 3.597, 4.34, 4.882, 5.66],
    model: (b, x) => at(b, 0) * x ** at(b, 1),
    starts: [
      [1, 5],
      [0.7, 4],
    ],
    certified: [0.76886226176, 3.8604055871],
    deviations: [0.01828197386, 0.051726610913],
    rss: 0.0043173084083,
  },
];

const solve = (problem: Problem, start: readonly number[]) =>
  leastSquares(
    (b) => Float64Array.from(problem.x, (x, k) => (problem.y[k] ?? 0) - problem.model(b, x)),
    Float64Array.from(start),
    {
      maxIterations: 400,
      tolerance: 1e-13,
      difference: 1e-5,
      sides: 'both',
      typical: start.map((value) => Math.abs(value) * 1e-3),
    },
  );

describe('certified nonlinear regression (NIST StRD)', () => {
  for (const problem of PROBLEMS) {
    problem.starts.forEach((start, which) => {
      test(`${problem.name}, start ${which + 1}: parameters to six digits, deviations to four`, () => {
        const solution = solve(problem, start);
        problem.certified.forEach((value, k) => {
          expect(Math.abs((solution.parameters[k] ?? 0) / value - 1)).toBeLessThan(1e-6);
        });
        expect(solution.sumOfSquares / problem.rss).toBeCloseTo(1, 8);
        const variance = solution.sumOfSquares / (problem.x.length - start.length);
        const covariance = covarianceOf(solution.triangle, variance);
        problem.deviations.forEach((value, k) => {
          expect(Math.abs(Math.sqrt(covariance.get(k, k)) / value - 1)).toBeLessThan(1e-4);
        });
      });
    });
  }

  test('agrees with ml-levenberg-marquardt on Misra1a', () => {
    const problem = PROBLEMS[0];
    if (!problem) throw new Error('unreachable');
    const reference = levenbergMarquardt(
      { x: [...problem.x], y: [...problem.y] },
      (b: number[]) => (x: number) => problem.model(b, x),
      {
        initialValues: [250, 5e-4],
        gradientDifference: [1e-3, 1e-9],
        centralDifference: true,
        damping: 0.01,
        maxIterations: 500,
        errorTolerance: 0,
      },
    );
    const own = solve(problem, [250, 5e-4]);
    expect((own.parameters[0] ?? 0) / (reference.parameterValues[0] ?? 1)).toBeCloseTo(1, 6);
  });

  test('a straight line with exact data is recovered exactly, and non-finite residuals are refused', () => {
    const line = leastSquares(
      (b) => Float64Array.from([0, 1, 2, 3], (x) => 2 * x + 1 - ((b[0] ?? 0) * x + (b[1] ?? 0))),
      Float64Array.of(0, 0),
      {
        maxIterations: 50,
        tolerance: 1e-14,
        difference: 1e-4,
        sides: 'both',
        typical: [1, 1],
      },
    );
    expect(line.parameters[0]).toBeCloseTo(2, 9);
    expect(() =>
      leastSquares(() => Float64Array.of(Number.NaN), Float64Array.of(1), {
        maxIterations: 5,
        tolerance: 1e-6,
        difference: 1e-4,
        sides: 'both',
        typical: [1],
      }),
    ).toThrow(/finite/);
  });
});
