import { describe, expect, test } from 'vitest';
import { countsPerUnit, quantise } from '../../src/plant/quantise.ts';
import { plantOf, runOf } from './simulate-fixture.ts';

/** Steady running at 1 unit/s from 0: output 0.5 on K = 2, held by the setpoint's pace alone. */
const steady = (reading: Parameters<typeof runOf>[0]['reading'], duration = 2) =>
  runOf({
    plant: plantOf(2, 1e-9),
    gains: { hold: 0.5 },
    duration,
    period: 0.02,
    reading: reading ?? {},
    to: 1,
    seed: 11,
  });

describe('a quantised reading', () => {
  test('is the nearest count, and the larger one exactly between two', () => {
    const counts = countsPerUnit(0.1);
    expect([0.24, 0.26, 0.25, -0.25, -0.26].map((y) => quantise(y, counts))).toEqual([0.2, 0.3, 0.3, -0.2, -0.3]);
  });

  test('comes out as the decimals of the resolution', () => {
    expect(quantise(0.30000000000000004, countsPerUnit(0.1))).toBe(0.3);
    expect(quantise(1.0006000000000002, countsPerUnit(0.0002))).toBe(1.0006);
    expect(countsPerUnit(360 / 4096)).toBeCloseTo(4096 / 360, 12);
  });

  test('of a steady speed of 0.3 counts a tick steps by 0 or 1 with the mean 0.3', () => {
    // Closed form: the standard deviation of such a difference is √(0.3·0.7) = 0.458258 counts.
    const resolution = 0.02 / 0.3;
    const samples = steady({ resolution }, 20);
    const steps = Array.from(samples.measured, (y, row) =>
      Math.round((y - (samples.measured[row - 1] ?? 0)) / resolution),
    );
    expect(new Set(steps.slice(1))).toEqual(new Set([0, 1]));
    const mean = steps.reduce((sum, step) => sum + step, 0) / (steps.length - 1);
    expect(mean).toBeCloseTo(0.3, 2);
  });
});

describe('a sensor', () => {
  test('that is late shows the motion as it was, between ticks too', () => {
    for (const delay of [0.005, 0.02, 0.033]) {
      const samples = steady({ delay });
      expect(samples.measured[50]).toBeCloseTo(1 - delay, 6);
    }
  });

  test('with its own period shows its last update', () => {
    const samples = steady({ period: 0.07 });
    samples.time.forEach((time, row) => {
      expect(samples.measured[row]).toBeCloseTo(Math.floor(time / 0.07 + 1e-9) * 0.07, 6);
    });
  });

  test('has noise of the given size about the truth, the same for the same seed', () => {
    const samples = steady({ noise: 0.01 }, 60);
    const misses = Array.from(samples.measured, (y, row) => y - (samples.time[row] ?? 0));
    const mean = misses.reduce((sum, miss) => sum + miss, 0) / misses.length;
    const sigma = Math.sqrt(misses.reduce((sum, miss) => sum + (miss - mean) ** 2, 0) / misses.length);
    // 3001 draws: the mean is within 4 σ/√n, the deviation within 4 σ/√(2n).
    expect(Math.abs(mean)).toBeLessThan((4 * 0.01) / Math.sqrt(3001));
    expect(Math.abs(sigma - 0.01)).toBeLessThan((4 * 0.01) / Math.sqrt(6002));
    expect([...steady({ noise: 0.01 }, 60).measured]).toEqual([...samples.measured]);
  });
});

test('a controller’s clock that jitters spaces its ticks about the period and ends with the duration', () => {
  const samples = steady({ jitter: 0.2 }, 40);
  const spacings = Array.from(samples.time.subarray(1), (time, row) => time - (samples.time[row] ?? 0));
  const mean = spacings.reduce((sum, spacing) => sum + spacing, 0) / spacings.length;
  const sigma = Math.sqrt(spacings.reduce((sum, spacing) => sum + (spacing - mean) ** 2, 0) / spacings.length);
  expect(Math.abs(mean / 0.02 - 1)).toBeLessThan(0.02);
  expect(Math.abs(sigma / 0.004 - 1)).toBeLessThan(0.1);
  expect(Math.min(...spacings)).toBeGreaterThan(0);
  expect(samples.time.at(-1)).toBeLessThanOrEqual(40);
});

describe('a trial starts', () => {
  test('held: a weight does not fall before the first output arrives', () => {
    const plant = plantOf(2, 0.1, { hold: 0.3, delay: 0.1 });
    const samples = runOf({ plant, gains: {}, from: 0.5, to: 0.5, duration: 0.5, period: 0.02 });
    expect([...samples.measured.subarray(0, 6)]).toEqual(Array(6).fill(0.5));
    expect(samples.measured[7]).toBeLessThan(0.5);
  });

  test('in steady running, for a speed loop', () => {
    const plant = plantOf(2, 0.1, { drag: 0.05, breakaway: 0.07 }, { quantity: 'speed' });
    const samples = runOf({ plant, gains: { kp: 1 }, from: 0.8, to: 1.2, duration: 0.5, period: 0.02 });
    expect(samples.measured[0]).toBe(0.8);
    expect(samples.output?.[0]).toBeCloseTo(0.4, 12);
  });

  test('with one row a period, the last at the end, and every part filled', () => {
    const samples = runOf({
      plant: plantOf(2, 0.1),
      gains: { kp: 1, ki: 1, kd: 0.1, hold: 0.02 },
      duration: 3,
      period: 0.02,
    });
    expect(samples.time.length).toBe(151);
    expect(samples.time[150]).toBeCloseTo(3, 12);
    samples.output?.forEach((u, row) => {
      const { p, i, d } = samples.parts ?? { p: [], i: [], d: [] };
      expect(u).toBeCloseTo((p[row] ?? 0) + (i[row] ?? 0) + (d[row] ?? 0) + 0.02, 12);
    });
  });
});
