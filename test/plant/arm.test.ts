import { expect, test } from 'vitest';
import { respond } from '../../src/plant/respond.ts';
import { oracleAdvance } from './oracle.ts';
import { drawsOf, randomPlant } from './random-plant.ts';

// Oracle: odex 2.0.4 between events at 1e-13. The sub-stepped solver is promised to 5e-7 of the arm's range of motion.
test('held outputs on 120 random arms agree with a general ODE solver to 5e-7 of the move', () => {
  const draws = drawsOf(55);
  const misses: number[] = [];
  for (let n = 0; n < 120; n++) {
    const plant = randomPlant(draws, 'cosine');
    const rows = 12;
    const time = new Float64Array(rows);
    const output = new Float64Array(rows);
    for (let row = 0; row < rows; row++) {
      time[row] = row === 0 ? 0 : (time[row - 1] ?? 0) + draws.log(0.004, 0.2);
      output[row] = draws.chance(0.15) ? 0 : draws.even(-1, 1);
    }
    const start = { position: 0, speed: draws.chance(0.5) ? 0 : plant.response.topSpeed * draws.even(-1, 1) };
    const seen = respond({ ...plant, quantity: 'position' }, start, time, output);
    const range = Math.max(Math.max(...seen) - Math.min(...seen), 0.01 * plant.response.topSpeed * plant.response.lag);
    let state = [start.position, start.speed];
    let worst = 0;
    for (let row = 1; row < rows; row++) {
      state = oracleAdvance(plant, state, output[row - 1] ?? 0, (time[row] ?? 0) - (time[row - 1] ?? 0));
      worst = Math.max(worst, Math.abs((seen[row] ?? 0) - (state[0] ?? 0)) / range);
    }
    misses.push(worst);
  }
  misses.sort((a, b) => b - a);
  expect(misses[0]).toBeLessThan(5e-7);
});
