import { describe, expect, test } from 'vitest';
import type { Samples } from '../../src/record/samples.ts';
import { overshootOf, plantOf, runOf } from './simulate-fixture.ts';

const last = (samples: Samples) => samples.measured[samples.measured.length - 1] ?? Number.NaN;
const largest = (samples: Samples, from: number, to: number) =>
  Math.max(...Array.from(samples.measured.subarray(from, to), (y) => Math.abs(1 - y)));

describe('the sampled loop', () => {
  test.each([
    // K = 1: Ogata, Discrete-Time Control Systems, gives 2.39 at h = 1 (mem); closed form (1 − E)/(T − TE − hE), and 2(1 + E)/… where
    // a pole leaves at z = −1.
    [1, 1, 1, 2.39221],
    [1, 1, 0.1, 20.3389],
    [1, 1, 5, 0.66077],
    [2, 0.2, 0.02, 50.847],
    [2, 0.2, 0.005, 200.84],
  ])('P on %f/(s(%fs + 1)) at %f s swings on for ever at kp %f', (k, lag, period, limit) => {
    const swing = (kp: number) => {
      const run = runOf({ plant: plantOf(k, lag), gains: { kp }, duration: 4000 * period, period });
      return largest(run, 3900, 4001) / largest(run, 1900, 2001);
    };
    expect(swing(limit * 0.999)).toBeLessThan(0.99);
    expect(swing(limit * 1.001)).toBeGreaterThan(1.01);
  });

  test('one more tick of delay lowers that limit: 6.84636 at h = 0.1', () => {
    const plant = plantOf(1, 1, { delay: 0.1 });
    const swing = (kp: number) => {
      const run = runOf({ plant, gains: { kp }, duration: 300, period: 0.1 });
      return largest(run, 2900, 3001) / largest(run, 1400, 1501);
    };
    expect(swing(6.84636 * 0.998)).toBeLessThan(0.95);
    expect(swing(6.84636 * 1.002)).toBeGreaterThan(1.05);
  });

  test('PD overshoots by 4.534, 4.294, 4.219 and 4.185 % at 20, 10, 5 and 2.5 ms', () => {
    // K 2, T 0.1, kp 8, kd 0.4 on the reading; recomputed in Python; the continuous loop 4.154 %. The largest reading, not between them.
    const seen = [0.02, 0.01, 0.005, 0.0025].map((period) =>
      overshootOf(
        runOf({
          plant: plantOf(2, 0.1),
          gains: { kp: 8, kd: 0.4 },
          duration: 1,
          period,
          settings: { derivativeOn: 'measured' },
        }),
      ),
    );
    [4.534, 4.294, 4.219, 4.185].forEach((expected, k) => {
      expect(seen[k]).toBeCloseTo(expected, 2);
    });
  });

  test('P alone falls short by 1/(1 + kp·gain) on a plant without integration', () => {
    // Closed form: gain 0.8, kp 10: 0.111111.
    const run = runOf({
      plant: plantOf(0.8, 0.1, {}, { quantity: 'speed' }),
      gains: { kp: 10 },
      duration: 0.5,
      period: 0.001,
    });
    expect(1 - last(run)).toBeCloseTo(0.111111, 6);
  });

  test('P alone rests a load’s worth short: 0.6 over 12 is 0.05, and hold takes it away', () => {
    const plant = plantOf(2, 0.1, { hold: 0.6 });
    expect(1 - last(runOf({ plant, gains: { kp: 12 }, duration: 5, period: 0.005 }))).toBeCloseTo(0.05, 9);
    expect(last(runOf({ plant, gains: { kp: 12, hold: 0.6 }, duration: 5, period: 0.005 }))).toBeCloseTo(1, 9);
  });

  test('a ramp is followed v/(K·kp) behind, and without a lag under pace 1/K', () => {
    // Closed form: 2/(2·5) = 0.2; the first order's lag costs nothing at constant speed.
    const request = { shape: { speed: 2, acceleration: 1e6 } };
    const ramp = { plant: plantOf(2, 0.1), to: 20, duration: 6, period: 0.001, request };
    const behind = runOf({ ...ramp, gains: { kp: 5 } });
    const row = 5000;
    expect((behind.setpoint[row] ?? 0) - (behind.measured[row] ?? 0)).toBeCloseTo(0.2, 2);
    const paced = runOf({ ...ramp, gains: { kp: 5, pace: 0.5 } });
    expect((paced.setpoint[row] ?? 0) - (paced.measured[row] ?? 0)).toBeCloseTo(0, 2);
  });
});

describe('windup: plant 1/s, |u| ≤ 1, step of 5, kp = ki = 1', () => {
  // Closed form and Python. An integrator is a speed loop whose lag is endless: K/τ = 1.
  const run = (zone: number | null) =>
    runOf({
      plant: plantOf(1e9, 1e9, {}, { quantity: 'speed' }),
      gains: { kp: 1, ki: 1, zone },
      to: 5,
      duration: 30,
      period: 0.001,
      most: 1,
      settings: { outsideZone: 'reset' },
    });

  test('leaves saturation at 8.899 s with 4.899 in the sum, overshoots by 80.15 %, peaks at 9.124 s', () => {
    const samples = run(null);
    const leaves = samples.output?.findIndex((u) => u < 1) ?? 0;
    expect(samples.time[leaves]).toBeCloseTo(8.899, 2);
    expect(samples.parts?.i[leaves]).toBeCloseTo(4.899, 2);
    expect(overshootOf(samples, 0, 5)).toBeCloseTo(80.15, 0);
    expect(samples.time[samples.measured.indexOf(Math.max(...samples.measured))]).toBeCloseTo(9.124, 2);
  });

  test('a zone with reset overshoots by 2.984 % at 0.5 and 5.969 % at 1', () => {
    expect(overshootOf(run(0.5), 0, 5)).toBeCloseTo(2.984, 1);
    expect(overshootOf(run(1), 0, 5)).toBeCloseTo(5.969, 1);
  });
});

describe('friction', () => {
  test('P comes to rest anywhere within breakaway over kp, and never outside', () => {
    const short: number[] = [];
    for (let n = 0; n < 60; n++) {
      const kp = 1 + 0.2 * n;
      const plant = plantOf(2, 0.1, { drag: 0.05, breakaway: 0.07 });
      const samples = runOf({ plant, gains: { kp }, duration: 20, period: 0.005, to: 0.3 + 0.01 * n, most: 1 });
      const rows = samples.measured.length;
      expect(samples.measured[rows - 1]).toBe(samples.measured[rows - 500]);
      short.push(((0.3 + 0.01 * n - last(samples)) * kp) / 0.07);
    }
    expect(Math.max(...short.map(Math.abs))).toBeLessThanOrEqual(1);
    expect(Math.max(...short)).toBeGreaterThan(0.5);
    expect(Math.min(...short)).toBeLessThan(0);
  });

  test('a mass on a spring under dry friction turns at −0.075, 0.035 and sticks at 0.005 after three halves of 0.314 s', () => {
    // Closed form (Coulomb damping; any vibration text): m 1, k 100, F 2, from 0.115. The spring is kp, its far end the setpoint 0.
    const samples = runOf({
      plant: plantOf(1e9, 1e9, { drag: 2, breakaway: 2 }),
      gains: { kp: 100 },
      from: 0.115,
      to: 0,
      duration: 1.5,
      period: 1e-4,
    });
    const at = (time: number) => samples.measured[Math.round(time / 1e-4)] ?? 0;
    const half = Math.PI / 10;
    expect(at(half)).toBeCloseTo(-0.075, 3);
    expect(at(2 * half)).toBeCloseTo(0.035, 3);
    expect(at(3 * half + 0.01)).toBeCloseTo(0.005, 3);
    expect(last(samples)).toBe(at(3 * half + 0.01));
  });

  // Set-up after Olsson & Åström, "Friction generated limit cycles", IEEE TCST 9 (2001) 629 (mem): m 1, u = −6v − 3e − 4∫e, Fc 1, viscous 0.4 (a lag of 2.5 s). The
  // numbers are those of the idealised cycle (closed-form map and event simulation in Python agree to 1e-4). Friction models differ
  // by 3 % on the period.
  const cycle = (breakaway: number, duration: number) =>
    runOf({
      plant: plantOf(2.5, 2.5, { drag: 1, breakaway }),
      gains: { kp: 3, ki: 4, kd: 6 },
      duration,
      period: 0.001,
      settings: { derivativeOn: 'measured' },
    });

  test('integral against static friction above Coulomb hunts for ever: every 24.013 s, ±0.0656', () => {
    const samples = cycle(1.5, 200);
    const starts: number[] = [];
    for (let row = 100_000; row < 200_000; row++) {
      const moved = (samples.measured[row] ?? 0) - (samples.measured[row - 1] ?? 0);
      const before = (samples.measured[row - 1] ?? 0) - (samples.measured[row - 2] ?? 0);
      if (moved > 0 && before === 0) starts.push(samples.time[row] ?? 0);
    }
    const periods = starts.slice(1).map((time, k) => time - (starts[k] ?? 0));
    expect(periods.length).toBeGreaterThan(2);
    for (const period of periods) expect(Math.abs(period / 24.013 - 1)).toBeLessThan(0.01);
    expect(Math.abs(largest(samples, 100_000, 200_001) / 0.06565 - 1)).toBeLessThan(0.01);
  });

  test('with static friction equal to Coulomb it settles', () => {
    const samples = cycle(1, 150);
    const error = (time: number) => Math.abs(1 - (samples.measured[Math.round(time * 1000)] ?? 0));
    // Python: 0.0959, 0.0220, 0.0101, 0.0046 at 20, 40, 80, 149 s.
    [
      [20, 0.0959],
      [40, 0.022],
      [80, 0.0101],
      [149, 0.0046],
    ].forEach(([time = 0, expected = 0]) => {
      expect(Math.abs(error(time) / expected - 1)).toBeLessThan(0.05);
    });
  });

  test('an error of 0.1 that P cannot move is torn off by I after 3 s', () => {
    // Closed form: (1.5 − 3·0.1)/(4·0.1).
    const plant = plantOf(1e9, 1e9, { drag: 1, breakaway: 1.5 });
    const samples = runOf({ plant, gains: { kp: 3, ki: 4 }, to: 0.1, duration: 4, period: 0.001 });
    expect(samples.time[samples.measured.findIndex((y) => y !== 0)]).toBeCloseTo(3, 2);
  });
});

describe('a drive at fixed kp (common practice, no source)', () => {
  const drive = plantOf(3, 0.25, { drag: 0.03, breakaway: 0.045 });
  const run = (gains: { ki?: number; kd?: number; zone?: number }, resolution = 0) =>
    runOf({ plant: drive, gains: { kp: 1.2, ...gains }, duration: 8, period: 0.02, most: 1, reading: { resolution } });

  test('ten times the integral, twice, overshoots more each time and ends in a growing swing', () => {
    const seen = [0.1, 1, 10].map((ki) => run({ ki }));
    const overshoots = seen.map((samples) => overshootOf(samples));
    expect(overshoots[1]).toBeGreaterThan((overshoots[0] ?? 0) * 1.5);
    expect(overshoots[2]).toBeGreaterThan((overshoots[1] ?? 0) * 1.5);
    const wild = seen[2];
    expect(wild && largest(wild, 300, 401)).toBeGreaterThan((wild && largest(wild, 60, 160)) ?? 0);
  });

  test('a zone lowers the overshoot of the same integral', () => {
    expect(overshootOf(run({ ki: 1, zone: 0.15 }))).toBeLessThan(0.7 * overshootOf(run({ ki: 1 })));
  });

  test('ten times the derivative first removes the overshoot, then chatters', () => {
    const reversals = (samples: Samples) => {
      const changes = Array.from(samples.output ?? []).map((u, row, all) => u - (all[row - 1] ?? u));
      return changes.filter((change, row) => change * (changes[row - 1] ?? 0) < 0 && Math.abs(change) > 0.02).length;
    };
    const [small, middle, large] = [0.03, 0.3, 3].map((kd) => run({ kd }, 0.001));
    if (!small || !middle || !large) throw new Error('three runs');
    expect(overshootOf(small)).toBeGreaterThan(3);
    expect(overshootOf(middle)).toBeLessThan(0.5);
    expect(reversals(large)).toBeGreaterThan(10 * Math.max(1, reversals(middle)));
  });
});
