import { expect, test } from 'vitest';
import { normalNumbers } from '../../src/trial/chance.ts';

test('the first numbers of small seeds are as normal as the others: mean 0, variance 1, within five sigma', () => {
  // Limits from the normal law: the mean of n is within 5/√n, the variance within 5·√(2/n).
  const seeds = 3000;
  for (const place of [0, 1, 7]) {
    let sum = 0;
    let squares = 0;
    for (let seed = 0; seed < seeds; seed++) {
      const value = normalNumbers(seed, 8)[place] ?? 0;
      sum += value;
      squares += value * value;
    }
    expect(Math.abs(sum / seeds)).toBeLessThan(5 / Math.sqrt(seeds));
    expect(Math.abs(squares / seeds - 1)).toBeLessThan(5 * Math.sqrt(2 / seeds));
  }
});

test('the same seed gives the same numbers', () => {
  expect(normalNumbers(7, 5)).toEqual(normalNumbers(7, 5));
  expect(normalNumbers(7, 5)).not.toEqual(normalNumbers(8, 5));
});
