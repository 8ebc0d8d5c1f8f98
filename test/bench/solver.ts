/**
 * How fast closed-loop trials run: the exact solver against three others on the same 256 seeded cases (test/bench/solver/cases.ts), one
 * core, PID position loop of 250 ticks: (1) 1 ms classical Runge–Kutta in TypeScript, (2) the same algorithm in C (solver.c, built
 * with gcc -O2 into a temporary folder), (3) odex, a general ODE solver. Repetitions alternate and medians of ratios are printed,
 * because the machine is shared. Errors are against odex.
 *
 * Run: npx tsx test/bench/solver.ts
 */
import { execFileSync } from 'node:child_process';
import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { createTrialRunner } from '../../src/trial/runner.ts';
import { oracleAdvance } from '../plant/oracle.ts';
import { DURATION, RESOLUTION, SETTINGS, type SolverCase, solverCases } from './solver/cases.ts';
import { runRungeKutta, runWith } from './solver/loop.ts';

const cases = solverCases(256);

function median(values: number[]): number {
  values.sort((a, b) => a - b);
  return values[values.length >> 1] ?? Number.NaN;
}

function seconds(work: () => void): number {
  const start = process.hrtime.bigint();
  work();
  return Number(process.hrtime.bigint() - start) / 1e9;
}

function exactRunner(resolution: number): (example: SolverCase) => Float64Array {
  const runner = createTrialRunner({
    controller: SETTINGS,
    reading: { resolution, noise: 0, delay: 0, period: 0, jitter: 0 },
    duration: DURATION,
    continuous: null,
    shape: null,
    seed: 1,
    lostBeyond: null,
  });
  return ({ plant, gains, move }) => {
    runner.run(plant, gains, move, 1);
    return runner.columns.measured;
  };
}

function buildC(folder: string): string | null {
  const binary = join(folder, 'solver');
  try {
    execFileSync('gcc', ['-O2', '-o', binary, join(import.meta.dirname, 'solver.c'), '-lm'], { stdio: 'ignore' });
    return binary;
  } catch {
    return null;
  }
}

function againstC(folder: string): void {
  const binary = buildC(folder);
  if (binary === null) {
    console.log('C: skipped, no gcc here');
    return;
  }
  const file = join(folder, 'cases.txt');
  const lines = cases.map(({ plant: { response: r }, gains: g, move }) =>
    [r.topSpeed, r.lag, r.drag, r.breakaway, g.kp, g.ki, g.kd, g.zone, move.to].join(' '),
  );
  writeFileSync(file, `${lines.join('\n')}\n`);
  const rounds = 24;
  for (const resolution of [RESOLUTION, 0]) {
    const exact = exactRunner(resolution);
    const c = () =>
      Number(
        execFileSync(binary, [file, `${rounds}`, `${resolution}`])
          .toString()
          .split(' ')[0],
      );
    const ours = () => seconds(() => Array.from({ length: rounds }, () => cases.forEach(exact)));
    for (let warm = 0; warm < 5; warm++) ours();
    const ratios: number[] = [];
    for (let round = 0; round < 31; round++) {
      const before = c();
      const mine = ours();
      const after = c();
      if (Math.abs(before - after) < 0.15 * before) ratios.push((0.5 * (before + after)) / mine);
    }
    const reading = resolution > 0 ? 'counted readings' : 'continuous readings';
    console.log(
      `C: ${median(ratios).toFixed(2)} of the rate of the same algorithm in C, ${reading} (${ratios.length} fair rounds)`,
    );
  }
}

function againstRungeKutta(): void {
  const exact = exactRunner(0);
  const all = () => cases.forEach(exact);
  const kutta = () => {
    for (const example of cases) runRungeKutta(example, into);
  };
  const into = new Float64Array(251);
  for (let warm = 0; warm < 8; warm++) all();
  for (let warm = 0; warm < 3; warm++) kutta();
  const rates: number[] = [];
  const ratios: number[] = [];
  for (let round = 0; round < 15; round++) {
    const mine = seconds(all);
    ratios.push(seconds(kutta) / mine);
    rates.push(cases.length / mine);
  }
  console.log(`exact: ${Math.round(median(rates))} trials/s of 250 ticks on one core`);
  console.log(`Runge–Kutta, 1 ms: ${median(ratios).toFixed(1)} times slower`);
}

/** odex between events is some thousand times slower: a few cases are enough. */
function againstOdex(): void {
  const exact = exactRunner(0);
  const few = cases.slice(0, 12);
  const oracle = (example: SolverCase, state: [number, number], u: number) => {
    const [x = 0, v = 0] = oracleAdvance(example.plant, state, u, SETTINGS.period);
    state[0] = x;
    state[1] = v;
  };
  const misses = { exact: [] as number[], kutta: [] as number[] };
  const ratios = few.map((example) => {
    const truth: Float64Array[] = [];
    const theirs = seconds(() => truth.push(runWith(example, oracle)));
    const mine = seconds(() => Array.from({ length: 200 }, () => exact(example))) / 200;
    const kutta = new Float64Array(251);
    runRungeKutta(example, kutta);
    const miss = (y: Float64Array) =>
      Math.max(...Array.from(truth[0] ?? [], (at, row) => Math.abs(at - (y[row] ?? 0)))) / example.move.to;
    misses.exact.push(miss(exact(example)));
    misses.kutta.push(miss(kutta));
    return theirs / mine;
  });
  console.log(`odex, 1e-13 between events: ${Math.round(median(ratios))} times slower`);
  console.log(
    `largest error against odex, share of the move, median and worst of ${few.length}: exact ` +
      `${median(misses.exact).toExponential(1)}, ${Math.max(...misses.exact).toExponential(1)}; Runge–Kutta ` +
      `${median(misses.kutta).toExponential(1)}, ${Math.max(...misses.kutta).toExponential(1)}`,
  );
}

const folder = mkdtempSync(join(tmpdir(), 'holdfast-bench-'));
try {
  againstRungeKutta();
  againstC(folder);
  againstOdex();
} finally {
  rmSync(folder, { recursive: true, force: true });
}
