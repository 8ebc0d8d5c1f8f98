import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import type { Gains } from '../../src/controller/settings.ts';
import { type FigureOptions, figuresOf } from '../../src/trial/figures.ts';
import { quickFigures } from '../../src/trial/quick-figures.ts';
import { createTrialRunner } from '../../src/trial/runner.ts';
import { readingOf, simulatedMechanismOf, simulateTrial } from '../../src/trial/simulate.ts';
import { sampled, samplesOf, secondOrder } from '../fixtures/second-order.ts';
import { starter } from '../fixtures/starters.ts';

const options = (tolerance: number): FigureOptions => ({
  move: { from: 0, to: 1 },
  tolerance,
  continuous: null,
  outputLimit: 1,
  fullOutput: 1,
  resolution: 0,
});

const step = (damping: number, tolerance = 0.02, frequency = 1) =>
  figuresOf(sampled(secondOrder(damping, frequency), 0.002 / frequency, 45 / frequency), options(tolerance));

describe('second-order responses', () => {
  test.each([
    // Closed form 100·exp(−πζ/√(1−ζ²)); any control text (mem).
    [0.1, 72.925],
    [0.2, 52.662],
    [0.3, 37.233],
    [0.4, 25.383],
    [0.5, 16.303],
    [0.6, 9.478],
    [0.7, 4.599],
    [0.8, 1.516],
  ])('ζ = %f overshoots by %f %%', (damping, expected) => {
    expect(step(damping).overshoot).toBeCloseTo(expected, 2);
  });

  test.each([
    // Peak time π/(ωn√(1−ζ²)) and 10–90 % rise with ωn = 1 (catalogue A3, A5, recomputed).
    [0.3, 3.2933, 1.3213],
    [0.5, 3.6276, 1.6376],
    [Math.SQRT1_2, 4.4429, 2.148],
  ])('ζ = %f peaks at %f s and rises in %f s', (damping, peak, rise) => {
    const figures = step(damping);
    expect(figures.peakTime).toBeCloseTo(peak, 2);
    expect(figures.riseTime).toBeCloseTo(rise, 3);
  });

  test.each([
    // Exact settling times × ωn; ζ kept off the jumps at 0.7797 (2 %) and 0.6901 (5 %).
    [0.3, 11.23, 10.137],
    [0.5, 8.0763, 5.2891],
    [Math.SQRT1_2, 5.9626, 2.9298],
    [0.9, 4.6996, 4.0143],
    [1, 5.8339, 4.7439],
  ])('ζ = %f settles to 2 %% in %f s and to 5 %% in %f s', (damping, two, five) => {
    expect(step(damping, 0.02).settlingTime).toBeCloseTo(two, 2);
    expect(step(damping, 0.05).settlingTime).toBeCloseTo(five, 2);
  });

  test('a first-order response: 10–90 in ln 9 τ, 2 % in ln 50 τ', () => {
    const figures = figuresOf(
      sampled((t) => -Math.expm1(-t / 0.3), 0.001, 5),
      options(0.02),
    );
    expect(figures.riseTime).toBeCloseTo(0.3 * Math.log(9), 4);
    expect(figures.settlingTime).toBeCloseTo(0.3 * Math.log(50), 4);
    expect(figures.overshoot).toBe(0);
    expect(figures.peakTime).toBeNull();
  });

  test.each([
    // Ratio of same-side extremes exp(−2πζ/√(1−ζ²)).
    [0.05, 0.7301],
    [0.1, 0.5318],
    [0.2, 0.2773],
    [0.215454, 0.25],
  ])('ζ = %f: each swing is %f of the one before', (damping, ratio) => {
    const figures = figuresOf(sampled(secondOrder(damping), 0.005, 60), options(0.02));
    expect(figures.swingRatio).toBeCloseTo(ratio, 2);
    expect(figures.swingPeriod).toBeCloseTo((2 * Math.PI) / Math.sqrt(1 - damping * damping), 1);
  });

  test('error integrals with ωn = 1: IAE and ITAE of the standard step', () => {
    // Catalogue A25 (recomputed): ζ 0.7 → IAE 1.61024, ITAE 1.98963; ζ 1 → 2.0, 3.0.
    expect(step(0.7).iae).toBeCloseTo(1.61024, 3);
    expect(step(0.7).itae).toBeCloseTo(1.98963, 3);
    expect(step(1).iae).toBeCloseTo(2, 3);
    expect(step(1).itae).toBeCloseTo(3, 3);
  });

  test('sampling never reads an overshoot high, and low by no more than (ωn·h)²/8 of it', () => {
    // y″ = ωn²(1 − y) at the peak; catalogue A18.
    for (const period of [0.01, 0.02, 0.05]) {
      const read = figuresOf(sampled(secondOrder(0.5, 10), period, 4), options(0.02)).overshoot;
      expect(read).toBeLessThanOrEqual(16.3034);
      expect(read).toBeGreaterThanOrEqual(16.3034 * (1 - (10 * period) ** 2 / 8) - 0.02);
    }
  });
});

describe('published references', () => {
  test('a log that can be checked by hand', () => {
    // Catalogue A17: crossings by linear interpolation, t10 = 0.1142857, t90 = 0.3666667.
    const log = samplesOf({
      time: [0, 0.1, 0.2, 0.3, 0.4, 0.5, 0.6, 0.7],
      measured: [0, 0.05, 0.4, 0.8, 0.95, 1.03, 0.99, 1],
    });
    const figures = figuresOf(log, { ...options(0.02), dwell: 0.1 });
    expect(figures.riseTime).toBeCloseTo(0.3666667 - 0.1142857, 7);
    expect(figures.overshoot).toBeCloseTo(3, 9);
    expect(figures.peakTime).toBeCloseTo(0.5, 12);
    expect(figures.settlingTime).toBeCloseTo(0.525, 9);
  });
});

describe('a record', () => {
  test('has no settling time when it ends outside, or has been inside too briefly', () => {
    expect(
      figuresOf(
        sampled((t) => 0.5 * t, 0.01, 1),
        options(0.02),
      ).settlingTime,
    ).toBeNull();
    expect(
      figuresOf(
        sampled((t) => Math.min(1, t), 0.01, 1.1),
        options(0.02),
      ).settlingTime,
    ).toBeNull();
    expect(
      figuresOf(
        sampled((t) => Math.min(1, t), 0.01, 1.4),
        options(0.02),
      ).settlingTime,
    ).toBeCloseTo(0.98, 9);
  });

  test('with one glitch sample is measured as if it were not there', () => {
    const clean = sampled(secondOrder(0.6, 8), 0.01, 3);
    const spoilt = { ...clean, measured: Float64Array.from(clean.measured) };
    spoilt.measured[120] = 14.82;
    expect(figuresOf(spoilt, options(0.02)).overshoot).toBeCloseTo(figuresOf(clean, options(0.02)).overshoot, 9);
  });

  test('rests where its last fifth stands still, and is still moving otherwise', () => {
    expect(
      figuresOf(
        sampled((t) => Math.min(0.9, 3 * t), 0.01, 2),
        options(0.02),
      ).restingError,
    ).toBeCloseTo(0.1, 9);
    expect(
      figuresOf(
        sampled((t) => t / 3, 0.01, 2),
        options(0.02),
      ).restingError,
    ).toBeNull();
  });

  test('on a wrapping scale goes the short way round', () => {
    const log = samplesOf({
      time: Array.from({ length: 101 }, (_, k) => k * 0.01),
      measured: Array.from({ length: 101 }, (_, k) => (350 + Math.min(33, k)) % 360),
      setpoint: 20,
    });
    const figures = figuresOf(log, { ...options(1), move: { from: 350, to: 20 }, continuous: 360 });
    expect(figures.overshoot).toBeCloseTo(10, 9);
    expect(figures.riseTime).toBeCloseTo(0.24, 9);
  });

  test('of exactly half a turn is measured the way the controller drives it', () => {
    const log = samplesOf({
      time: Array.from({ length: 101 }, (_, k) => k * 0.01),
      measured: Array.from({ length: 101 }, (_, k) => Math.min(180, 4 * k)),
      setpoint: 180,
    });
    const figures = figuresOf(log, { ...options(1), move: { from: 0, to: 180 }, continuous: 360 });
    expect(figures.overshoot).toBe(0);
    expect(figures.riseTime).toBeCloseTo(0.36, 9);
    expect(figures.settlingTime).toBeCloseTo(0.4475, 9);
  });

  test('of fewer than two rows is refused', () => {
    expect(() => figuresOf(samplesOf({ time: [0], measured: [0] }), options(0.02))).toThrow(RangeError);
  });

  test('counts the output: at its limit, turning, and its effort', () => {
    const time = Array.from({ length: 101 }, (_, k) => k * 0.01);
    const output = time.map((_, k) => (k < 50 ? 1 : k % 2 === 0 ? 0.1 : -0.1));
    const figures = figuresOf(samplesOf({ time, measured: time.map((t) => Math.min(1, t)), output }), options(0.02));
    expect(figures.saturated).toBeCloseTo(0.5, 2);
    // 51 samples from the first low one on: 50 steps, of which the first only sets out.
    expect(figures.chatter).toBeCloseTo(49, 6);
    expect(figures.effort).toBeCloseTo(0.505, 2);
  });
});

describe('the quick figures of the search', () => {
  test('agree with the full ones on random trials', () => {
    const profile = starter('turret');
    const mechanism = simulatedMechanismOf(profile);
    if (!mechanism) throw new Error('the turret is known');
    fc.assert(
      fc.property(
        fc.double({ min: 0.001, max: 0.05, noNaN: true }),
        fc.double({ min: 0, max: 0.004, noNaN: true }),
        (kp, kd) => {
          const gains: Gains = { kp, ki: 0, kd, zone: null, hold: 0, pace: 0 };
          const move = { from: 10, to: 100 };
          const runner = createTrialRunner({
            controller: profile.controller,
            reading: readingOf(profile),
            duration: 2,
            continuous: profile.continuous,
            shape: null,
            seed: 3,
            lostBeyond: null,
          });
          const rows = runner.run(mechanism.plant, gains, move, 0.8);
          const quick = quickFigures(runner.columns, rows, {
            move,
            tolerance: 1,
            continuous: 360,
            resolution: 0.09,
            controller: profile.controller,
          });
          const samples = simulateTrial(
            mechanism,
            { controller: profile.controller, gains, move, duration: 2, outputCap: 0.8, continuous: 360, shape: null },
            3,
          );
          const full = figuresOf(samples, {
            move,
            tolerance: 1,
            continuous: 360,
            outputLimit: 0.8,
            fullOutput: 1,
            resolution: 0.09,
          });
          expect(quick.overshoot).toBeCloseTo(full.overshoot, 9);
          if (full.settlingTime === null) expect(quick.settlingTime).toBeNull();
          else expect(quick.settlingTime).toBeCloseTo(full.settlingTime, 9);
          expect(quick.chatter).toBeCloseTo(full.chatter ?? 0, 9);
        },
      ),
      { numRuns: 60, seed: 7 },
    );
  });
});
