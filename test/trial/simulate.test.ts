import { expect, test } from 'vitest';
import { createTrialRunner } from '../../src/trial/runner.ts';
import { simulateTrial } from '../../src/trial/simulate.ts';
import { drawsOf } from '../plant/random-plant.ts';
import { oracleTrial } from './closed-loop-oracle.ts';
import { randomTrial } from './random-trial.ts';

// Oracle: odex 2.0.4 between events, and a tick written anew from the text of contracts section 4. A loop that amplifies differences
// (a growing swing against static friction) multiplies rounding from tick to tick, so the trials are 60 ticks long.
test('120 random closed loops agree with a general ODE solver to 1e-9 of the move', () => {
  const draws = drawsOf(7);
  const misses: number[] = [];
  for (let n = 0; n < 120; n++) {
    const { mechanism, request } = randomTrial(draws, draws.chance(0.5) ? 'constant' : 'none');
    const seen = simulateTrial(mechanism, request, n);
    const expected = oracleTrial(mechanism, request, [...seen.time]);
    const move = Math.abs(request.move.to - request.move.from);
    misses.push(Math.max(...expected.measured.map((y, row) => Math.abs(y - (seen.measured[row] ?? 0)) / move)));
  }
  expect(Math.max(...misses)).toBeLessThan(1e-9);
});

// Some of the loops are unstable and double a difference of rounding every other tick: those are held to it for 60 ticks only.
test('the search’s loop and the general loop agree to rounding on 300 random trials', () => {
  const draws = drawsOf(8);
  const early: number[] = [];
  const whole: number[] = [];
  for (let n = 0; n < 300; n++) {
    const { mechanism, request } = randomTrial(draws, draws.chance(0.5) ? 'constant' : 'none');
    const controller = { ...request.controller, slew: null };
    const gains = { ...request.gains, pace: 0 };
    const setup = {
      controller,
      reading: { ...mechanism.reading, jitter: 0, noise: draws.chance(0.2) ? 0.001 : 0 },
      duration: 150 * controller.period,
      continuous: request.continuous,
      shape: null,
      seed: n,
      lostBeyond: null,
    };
    const swift = createTrialRunner(setup);
    const general = createTrialRunner({ ...setup, parts: 'kept' });
    const rows = swift.run(mechanism.plant, gains, request.move, request.outputCap);
    expect(general.run(mechanism.plant, gains, request.move, request.outputCap)).toBe(rows);
    const move = Math.abs(request.move.to - request.move.from);
    const misses = Array.from(
      swift.columns.measured,
      (y, row) => Math.abs(y - (general.columns.measured[row] ?? 0)) / move,
    );
    early.push(Math.max(...misses.slice(0, 60)));
    whole.push(Math.max(...misses));
  }
  expect(Math.max(...early)).toBeLessThan(1e-9);
  expect(whole.filter((miss) => miss < 1e-9).length).toBeGreaterThan(285);
});
