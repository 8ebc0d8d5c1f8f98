import { describe, expect, test } from 'vitest';
import type { Gains } from '../../src/controller/settings.ts';
import type { Samples } from '../../src/record/samples.ts';
import { plantOf, type Run, runOf } from './simulate-fixture.ts';

// Derived by dimensional analysis: with the same dimensionless groups K·kp·T, K·ki·T², K·kd, h/T, zone/r, umax·K·T/r two loops are one.
// Base case of the design's catalogue: K 2, T 0.1, h 0.02, kp 8, ki 6, kd 0.4 on the reading, r 1, zone 0.3, umax 5; friction added here.
const FRICTION = { drag: 0.2, breakaway: 0.3 };
const GAINS = { kp: 8, ki: 6, kd: 0.4, zone: 0.3 };

function base(changes: Partial<Run> = {}): Run {
  return {
    plant: plantOf(2, 0.1, FRICTION),
    gains: GAINS,
    duration: 3,
    period: 0.02,
    most: 5,
    settings: { derivativeOn: 'measured' },
    ...changes,
  };
}

/** Largest difference of two runs, reading divided by `scale`. */
function difference(changed: Samples, scale = 1): number {
  const original = runOf(base()).measured;
  expect(changed.measured.length).toBe(original.length);
  return Math.max(...Array.from(changed.measured, (y, row) => Math.abs(y / scale - (original[row] ?? 0))));
}

const scaled = (gains: typeof GAINS, kp: number, ki: number, kd: number, zone = 1): Partial<Gains> => ({
  kp: gains.kp * kp,
  ki: gains.ki * ki,
  kd: gains.kd * kd,
  zone: gains.zone * zone,
});

describe('similar loops respond alike', () => {
  test('the measured unit × 360: gains ÷ 360, zone × 360', () => {
    const run = base({
      plant: plantOf(720, 0.1, FRICTION),
      gains: scaled(GAINS, 1 / 360, 1 / 360, 1 / 360, 360),
      to: 360,
    });
    expect(difference(runOf(run), 360)).toBeLessThan(1e-12);
  });

  test('the output unit ÷ 12: all gains and limits ÷ 12', () => {
    const plant = plantOf(24, 0.1, { drag: 0.2 / 12, breakaway: 0.3 / 12 });
    expect(difference(runOf(base({ plant, gains: scaled(GAINS, 1 / 12, 1 / 12, 1 / 12), most: 5 / 12 })))).toBeLessThan(
      1e-12,
    );
  });

  test('plant gain × 1.7 with friction ÷ 1.7 in output: gains and limits ÷ 1.7', () => {
    const plant = plantOf(3.4, 0.1, { drag: 0.2 / 1.7, breakaway: 0.3 / 1.7 });
    const run = base({ plant, gains: scaled(GAINS, 1 / 1.7, 1 / 1.7, 1 / 1.7), most: 5 / 1.7 });
    expect(difference(runOf(run))).toBeLessThan(1e-12);
  });

  test('the same friction and limit under more plant gain is another response, saturated or stuck', () => {
    const run = base({ plant: plantOf(3.4, 0.1, FRICTION), gains: scaled(GAINS, 1 / 1.7, 1 / 1.7, 1 / 1.7) });
    expect(difference(runOf(run))).toBeGreaterThan(0.01);
  });

  test('all times × 2.5, plant gain ÷ 2.5, delay and period × 2.5: kp the same, ki ÷ 2.5, kd × 2.5', () => {
    const plant = plantOf(0.8, 0.25, { ...FRICTION, delay: 0.075 });
    const run = base({ plant, gains: scaled(GAINS, 1, 1 / 2.5, 2.5), duration: 7.5, period: 0.05 });
    const original = runOf(base({ plant: plantOf(2, 0.1, { ...FRICTION, delay: 0.03 }) }));
    const stretched = runOf(run);
    const worst = Math.max(...Array.from(stretched.measured, (y, row) => Math.abs(y - (original.measured[row] ?? 0))));
    expect(worst).toBeLessThan(1e-12);
    expect(stretched.time[150]).toBeCloseTo(2.5 * (original.time[150] ?? 0), 12);
  });

  test('gain × 3 and times × 2 together: kp ÷ 6, ki ÷ 12, kd ÷ 3, limit and friction ÷ 6', () => {
    const plant = plantOf(6, 0.2, { drag: 0.2 / 6, breakaway: 0.3 / 6 });
    const run = base({ plant, gains: scaled(GAINS, 1 / 6, 1 / 12, 1 / 3), most: 5 / 6, duration: 6, period: 0.04 });
    expect(difference(runOf(run))).toBeLessThan(1e-12);
  });

  test('a torque-driven inertia × 3: all gains, friction and the limit × 3', () => {
    const torque = (inertia: number, share: number): Run =>
      base({
        plant: plantOf(1e9 / inertia, 1e9, { drag: 0.2 * share, breakaway: 0.3 * share }),
        gains: scaled(GAINS, share, share, 2.5 * share),
        most: 5 * share,
      });
    const light = runOf(torque(1, 1)).measured;
    const heavy = runOf(torque(3, 3)).measured;
    expect(Math.max(...Array.from(heavy, (y, row) => Math.abs(y - (light[row] ?? 0))))).toBeLessThan(1e-9);
  });

  test('the same ωn 25 and ζ 0.8 on three mechanisms: kp = ωn²T/K and kd = (2ζωnT − 1)/K', () => {
    // Numbers of the catalogue for one motor at 50:1, two motors, 60:1: kp 85, 55, 80; kd 4.44, 2.52, 3.92. Alike as the period goes to 0.
    const responses = [
      [1, 0.136, 85, 4.44],
      [1, 0.088, 55, 2.52],
      [0.83333333, 0.10666667, 80, 3.92],
    ].map(([k = 1, lag = 1, kp = 0, kd = 0]) => {
      expect(kp).toBeCloseTo((25 ** 2 * lag) / k, 3);
      expect(kd).toBeCloseTo((2 * 0.8 * 25 * lag - 1) / k, 3);
      const settings = { derivativeOn: 'measured' } as const;
      return runOf({ plant: plantOf(k, lag), gains: { kp, kd }, duration: 0.4, period: 1e-4, settings }).measured;
    });
    const [one, ...others] = responses;
    for (const other of others) {
      expect(Math.max(...Array.from(other, (y, row) => Math.abs(y - (one?.[row] ?? 0))))).toBeLessThan(1e-3);
    }
  });

  test('half the period with the same gains per second comes close; with gains left per tick it does not', () => {
    // Base case without friction, recomputed in Python: 20 → 10 ms differ by 0.0179 at most, and by 0.1014 with the mistake.
    const smooth = { plant: plantOf(2, 0.1) };
    const slow = runOf(base(smooth)).measured;
    const apart = (gains: Partial<Gains>) => {
      const fast = runOf(base({ ...smooth, gains, period: 0.01 })).measured;
      return Math.max(...Array.from(slow, (y, row) => Math.abs(y - (fast[2 * row] ?? 0))));
    };
    expect(apart(GAINS)).toBeCloseTo(0.0179, 4);
    expect(apart({ ...GAINS, ki: GAINS.ki * 2, kd: GAINS.kd / 2 })).toBeCloseTo(0.1014, 4);
  });
});
