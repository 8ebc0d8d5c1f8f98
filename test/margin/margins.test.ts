import { describe, expect, test } from 'vitest';
import type { ControllerSettings, Gains } from '../../src/controller/settings.ts';
import { evaluate } from '../../src/margin/complex.ts';
import { marginsOfLoop, onUnitCircle } from '../../src/margin/loop-margins.ts';
import { marginsOf, maxSensitivityOf, worstMargins } from '../../src/margin/of-response.ts';
import {
  characteristic,
  isSchurStable,
  sampledController,
  sampledPlant,
  spectralRadiusOf,
} from '../../src/margin/sampled-loop.ts';

const settings = (period: number): ControllerSettings => ({
  period,
  output: { unit: 'fraction', min: -1, max: 1 },
  timeBase: 'seconds',
  form: 'parallel',
  derivativeOn: 'error',
  derivativeFilter: 0,
  outsideZone: 'hold',
  sumLimit: null,
  slew: null,
});
const gains = (kp: number, kd = 0, ki = 0): Gains => ({ kp, ki, kd, zone: null, hold: 0, pace: 0 });
const response = (topSpeed: number, lag: number, delay = 0) => ({
  topSpeed,
  lag,
  delay,
  drag: 0,
  dragBack: 0,
  breakaway: 0,
  breakawayBack: 0,
  hold: 0,
});
const loop = (kp: number, kd: number, delay: number) => ({
  response: response(2, 0.2, delay),
  quantity: 'position' as const,
  gains: gains(kp, kd),
  settings: settings(0.02),
  sensorDelay: 0,
});

describe('the sampled plant', () => {
  test('K/(s(τs+1)) with K = τ = T = 1 is (0.36788 z + 0.26424)/((z−1)(z−0.36788))', () => {
    // Ogata, Discrete-Time Control Systems (mem); recomputed closed form.
    const { numerator, denominator } = sampledPlant({ topSpeed: 1, lag: 1 }, 'position', 1, 0);
    expect(numerator[0]).toBeCloseTo(0.36787944, 8);
    expect(numerator[1]).toBeCloseTo(0.26424112, 8);
    // One more factor z: the output of a tick is seen at the next one at the earliest.
    expect(denominator).toHaveLength(4);
    expect(denominator[1]).toBeCloseTo(-1.36787944, 8);
    expect(denominator[2]).toBeCloseTo(0.36787944, 8);
  });

  test('K 2, τ 0.2, T 0.02 gives a 1.93497e−3, b 1.87154e−3', () => {
    const { numerator } = sampledPlant({ topSpeed: 2, lag: 0.2 }, 'position', 0.02, 0);
    expect(numerator[0]).toBeCloseTo(1.93497e-3, 8);
    expect(numerator[1]).toBeCloseTo(1.87154e-3, 8);
  });

  test('a dead time of a whole tick is a factor 1/z, and one of half a tick lies between', () => {
    const at = { re: Math.cos(0.3), im: Math.sin(0.3) };
    const value = (dead: number) => {
      const { numerator, denominator } = sampledPlant({ topSpeed: 2, lag: 0.2 }, 'position', 0.02, dead);
      const n = evaluate(numerator, at);
      const d = evaluate(denominator, at);
      return Math.atan2(n.im, n.re) - Math.atan2(d.im, d.re);
    };
    const wrap = (angle: number) => Math.atan2(Math.sin(angle), Math.cos(angle));
    expect(wrap(value(0.02) - value(0))).toBeCloseTo(-0.3, 9);
    expect(wrap(value(0.01) - value(0))).toBeGreaterThan(-0.3);
    expect(wrap(value(0.01) - value(0))).toBeLessThan(0);
  });
});

describe('stability limits under P', () => {
  const limit = (period: number): number => {
    let low = 0;
    let high = 3000;
    for (let round = 0; round < 80; round++) {
      const kp = (low + high) / 2;
      const plant = sampledPlant({ topSpeed: 1, lag: 1 }, 'position', period, 0);
      const controller = sampledController(gains(kp), settings(period));
      const closed = characteristic({
        numerator: plant.numerator.map((value) => value * (controller.numerator[0] ?? 0)),
        denominator: plant.denominator,
        period,
      });
      if (isSchurStable(closed)) low = kp;
      else high = kp;
    }
    return low;
  };

  test.each([
    // T, limit: closed form (1−E)/(T−TE−hE), table recomputed; Ogata gives 2.39 for T = 1 (mem).
    [0.01, 200.334],
    [0.1, 20.3389],
    [0.25, 8.34745],
    [1, 2.39221],
    [2, 1.45568],
    [5, 0.66077],
  ])('1/(s(s+1)) sampled every %f s is stable up to %f', (period, expected) => {
    expect(limit(period) / expected).toBeCloseTo(1, 4);
  });

  test('the Schur–Cohn verdict agrees with the eigenvalues', () => {
    for (let k = 0; k < 200; k++) {
      const polynomial = [1, ...[0, 1, 2, 3].map((j) => Math.sin(12.9898 * (k * 4 + j) + 1) * 1.2)];
      expect(isSchurStable(polynomial)).toBe(spectralRadiusOf(polynomial) < 1);
    }
  });
});

describe('margins of the sampled loop', () => {
  test('K 2, τ 0.2, T 0.02 under P = 5', () => {
    // Octave 7.3 control 3.4 `margin` agrees with these (recomputed).
    const margins = marginsOf(loop(5, 0, 0));
    expect(margins.gain).toBeCloseTo(10.1694, 3);
    expect(margins.phase).toBeCloseTo(35.1, 1);
    expect(margins.delay).toBeCloseTo(0.09809, 4);
    expect(margins.maxSensitivity).toBeCloseTo(1.9687, 3);
    expect(margins.spectralRadius).toBeCloseTo(Math.hypot(0.947581, 0.127612), 5);
  });

  test('with kd 0.3 and two ticks of dead time', () => {
    const margins = marginsOf(loop(5, 0.3, 0.04));
    expect(margins.gain).toBeCloseTo(4.893, 2);
    expect(margins.phase).toBeCloseTo(39.19, 1);
    expect(margins.delay).toBeCloseTo(0.1033, 3);
    expect(margins.maxSensitivity).toBeCloseTo(1.808, 2);
  });

  test.each([
    // h, phase margin, gain margin, Ms of 2/(s(s+1)) sampled (recomputed, catalogue C12).
    [0.01, 38.3104, 100.167, 1.8022],
    [0.05, 36.8813, 20.1681, 1.8727],
    [0.2, 31.5664, 5.1723, 2.1915],
  ])('2/(s(s+1)) sampled every %f s', (period, phase, gain, peak) => {
    const margins = marginsOf({
      response: response(2, 1),
      quantity: 'position',
      gains: gains(1),
      settings: settings(period),
      sensorDelay: 0,
    });
    expect(margins.phase).toBeCloseTo(phase, 2);
    expect((margins.gain ?? 0) / gain).toBeCloseTo(1, 3);
    expect(margins.maxSensitivity).toBeCloseTo(peak, 3);
  });

  test('an unstable loop has an infinite sensitivity in the cheap check, and a spectral radius above 1', () => {
    expect(maxSensitivityOf(loop(60, 0, 0))).toBe(Number.POSITIVE_INFINITY);
    expect(marginsOf(loop(60, 0, 0)).spectralRadius).toBeGreaterThan(1);
  });

  test('the cheap check finds the peak to a few percent', () => {
    for (const [kp, kd, delay] of [
      [5, 0, 0],
      [5, 0.3, 0.04],
      [12, 1.5, 0.01],
    ] as const) {
      const exact = marginsOf(loop(kp, kd, delay)).maxSensitivity;
      expect(maxSensitivityOf(loop(kp, kd, delay)) / exact).toBeCloseTo(1, 1);
    }
  });

  test('the worst over several models is the worst of each', () => {
    const worst = worstMargins([loop(5, 0, 0), loop(5, 0, 0.03)]);
    expect(worst?.phase).toBeCloseTo(marginsOf(loop(5, 0, 0.03)).phase ?? 0, 9);
    expect(worstMargins([])).toBeNull();
  });
});

describe('margins of published loops', () => {
  const polynomialLoop =
    (numerator: readonly number[], denominator: readonly number[], dead = 0) =>
    (w: number) => {
      const s = { re: 0, im: w };
      const n = evaluate(numerator, s);
      const d = evaluate(denominator, s);
      const size = d.re * d.re + d.im * d.im;
      const value = { re: (n.re * d.re + n.im * d.im) / size, im: (n.im * d.re - n.re * d.im) / size };
      const turn = { re: Math.cos(w * dead), im: -Math.sin(w * dead) };
      return { re: value.re * turn.re - value.im * turn.im, im: value.re * turn.im + value.im * turn.re };
    };

  test('1/(s³+2s²+3s+4): gain margin 2 at 1.7321 rad/s, Ms 2.3982', () => {
    // python-control, control/tests/margin_test.py (values only).
    const margins = marginsOfLoop(polynomialLoop([1], [1, 2, 3, 4]), 1e-3, 100);
    expect(margins.gain).toBeCloseTo(2, 6);
    expect(margins.maxSensitivity).toBeCloseTo(1 / 0.41698, 3);
  });

  test('three crossovers: the smallest phase margin is told, not the last', () => {
    // Same source: 8.75(4s²+0.4s+1)/((100s+1)(s²+0.22s+1)(s²/100+0.008s+1)), margins 97.594°, −157.78°, 134.74°.
    const denominator = [
      [100, 1],
      [1, 0.22, 1],
      [0.01, 0.008, 1],
    ].reduce((a, b) => {
      const out = new Array<number>(a.length + b.length - 1).fill(0);
      a.forEach((x, i) => {
        b.forEach((y, j) => {
          out[i + j] = (out[i + j] ?? 0) + x * y;
        });
      });
      return out;
    });
    const margins = marginsOfLoop(polynomialLoop([35, 3.5, 8.75], denominator), 1e-4, 1e3);
    expect(margins.gain).toBeCloseTo(2.2716, 2);
    expect(margins.phase).toBeCloseTo(97.594, 1);
    expect(margins.maxSensitivity).toBeCloseTo(1 / 0.55908, 2);
  });

  test('e^(−0.5 s)/s: phase margin 61.3521°, gain margin π, delay margin 1.070796 s, Ms 1.59049', () => {
    // Closed form: 90° − KL; π/(2KL); π/2 − L. The SIMC cancelling case of Skogestad (2003) has the same loop.
    const margins = marginsOfLoop(polynomialLoop([1], [1, 0], 0.5), 1e-3, 1e3);
    expect(margins.phase).toBeCloseTo(61.3521, 3);
    expect(margins.gain).toBeCloseTo(Math.PI, 4);
    expect(margins.delay).toBeCloseTo(1.070796, 5);
    expect(margins.maxSensitivity).toBeCloseTo(1.59049, 4);
  });

  test('a discrete loop: gain at ω180 −0.28598, phase margin 66.83°', () => {
    // python-control, margin_test.py: (3z²+11z+3)·1e−4/(z³−2.7145z²+2.4562z−0.7408), h = 0.1.
    const margins = marginsOfLoop(
      onUnitCircle([3e-4, 11e-4, 3e-4], [1, -2.7145, 2.4562, -0.7408], 0.1),
      1e-3,
      Math.PI / 0.1,
    );
    expect(1 / (margins.gain ?? 0)).toBeCloseTo(0.28598, 3);
    expect(margins.phase).toBeCloseTo(66.83, 1);
  });
});
