import { expect, test } from 'vitest';
import { respond } from '../../src/plant/respond.ts';
import { oracleAdvance } from './oracle.ts';
import { drawsOf, randomPlant } from './random-plant.ts';

// Oracle: odex 2.0.4 (npm, BSD-2), tolerance 1e-13, started anew at every event that its dense output shows.
test('held outputs on 240 random mechanisms agree with a general ODE solver to 1e-9 of the move', () => {
  const draws = drawsOf(101);
  let worst = 0;
  for (let n = 0; n < 240; n++) {
    const plant = randomPlant(draws, draws.chance(0.5) ? 'constant' : 'none');
    const rows = 12;
    const time = new Float64Array(rows);
    const output = new Float64Array(rows);
    for (let row = 0; row < rows; row++) {
      time[row] = row === 0 ? 0 : (time[row - 1] ?? 0) + draws.log(0.004, 0.2);
      output[row] = draws.chance(0.15) ? 0 : draws.even(-1, 1);
    }
    const start = { position: 0, speed: draws.chance(0.5) ? 0 : plant.response.topSpeed * draws.even(-1, 1) };
    const seen = respond(plant, start, time, output);
    let state = [start.position, start.speed];
    const smallest = plant.response.topSpeed * (plant.quantity === 'speed' ? 0.01 : 0.01 * plant.response.lag);
    const scale = Math.max(smallest, Math.max(...seen) - Math.min(...seen));
    for (let row = 1; row < rows; row++) {
      state = oracleAdvance(plant, state, output[row - 1] ?? 0, (time[row] ?? 0) - (time[row - 1] ?? 0));
      const expected = (plant.quantity === 'speed' ? state[1] : state[0]) ?? 0;
      worst = Math.max(worst, Math.abs((seen[row] ?? 0) - expected) / scale);
    }
  }
  expect(worst).toBeLessThan(1e-9);
});
