import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import {
  type Convention,
  conventionOf,
  type EnteredGains,
  fromConvention,
  gainLines,
  NoEquivalent,
  toConvention,
} from '../../src/controller/forms.ts';
import type { ControllerSettings, Gains } from '../../src/controller/settings.ts';
import { createController, tick } from '../../src/controller/tick.ts';
import { starter } from '../fixtures/starters.ts';

const plain: Convention = {
  form: 'parallel',
  timeBase: 'seconds',
  outputUnit: 'fraction',
  fullOutput: 1,
  period: 0.02,
};
const gains = (kp: number, ki: number, kd: number): Gains => ({ kp, ki, kd, zone: null, hold: 0, pace: 0 });

describe('forms of the same gains', () => {
  test('series (2, 8, 2) is standard (2.5, 10, 1.6)', () => {
    // Åström & Hägglund (1995), ch. 3 (mem): K(1 + Td/Ti), Ti + Td, Ti·Td/(Ti + Td).
    const series: EnteredGains = {
      form: 'series',
      gain: 2,
      integralTime: 8,
      derivativeTime: 2,
      zone: null,
      hold: 0,
      pace: 0,
    };
    const canonical = fromConvention(series, 1, { ...plain, form: 'series' });
    const standard = toConvention(canonical, 1, { ...plain, form: 'standard' });
    expect(standard).toMatchObject({ form: 'standard' });
    if (standard.form === 'parallel') throw new Error('asked for standard');
    expect(standard.gain).toBeCloseTo(2.5, 12);
    expect(standard.integralTime).toBeCloseTo(10, 12);
    expect(standard.derivativeTime).toBeCloseTo(1.6, 12);
    expect(toConvention(canonical, 1, { ...plain, form: 'series' })).toMatchObject({
      gain: expect.closeTo(2, 9),
      integralTime: expect.closeTo(8, 9),
      derivativeTime: expect.closeTo(2, 9),
    });
  });

  test('Ti 2, Td 0.3: series gain × 0.816228, Ti′ 1.632456, Td′ 0.367544', () => {
    const series = toConvention(gains(1, 1 / 2, 0.3), 1, { ...plain, form: 'series' });
    if (series.form === 'parallel') throw new Error('asked for series');
    expect(series.gain).toBeCloseTo(0.816228, 6);
    expect(series.integralTime).toBeCloseTo(1.632456, 6);
    expect(series.derivativeTime).toBeCloseTo(0.367544, 6);
  });

  test('at the limit Ti = 4 Td (Ziegler–Nichols PID) both series times are Ti/2; beyond it there is no series form', () => {
    const limit = toConvention(gains(4.8, 4.8 / 1.8138, 4.8 * 0.45345), 1, { ...plain, form: 'series' });
    expect(limit).toMatchObject({
      gain: expect.closeTo(2.4, 3),
      integralTime: expect.closeTo(0.9069, 3),
      derivativeTime: expect.closeTo(0.9069, 3),
    });
    // (2, 20 s, 6 s): 1 − 4·6/20 = −0.2.
    expect(() => toConvention(gains(2, 0.1, 12), 1, { ...plain, form: 'series' })).toThrow(NoEquivalent);
    expect(() => toConvention(gains(0, 0.1, 0), 1, { ...plain, form: 'standard' })).toThrow(/Kp 0/);
  });

  test('code that leaves out dt: ki·T and kd/T', () => {
    // Catalogue D6: Ki 0.2, Kd 0.03 at 20 ms → 0.004, 1.5; at 10 ms → 0.002, 3.
    expect(toConvention(gains(1, 0.2, 0.03), 1, { ...plain, timeBase: 'ticks' })).toMatchObject({
      ki: expect.closeTo(0.004, 12),
      kd: expect.closeTo(1.5, 12),
    });
    expect(toConvention(gains(1, 0.2, 0.03), 1, { ...plain, timeBase: 'ticks', period: 0.01 })).toMatchObject({
      ki: expect.closeTo(0.002, 12),
      kd: expect.closeTo(3, 12),
    });
  });

  test('output in percent is a hundred times the fraction', () => {
    expect(toConvention(gains(1.2, 0.5, 0.1), 1, { ...plain, outputUnit: 'percent', fullOutput: 100 })).toMatchObject({
      kp: expect.closeTo(120, 9),
      ki: expect.closeTo(50, 9),
      kd: expect.closeTo(10, 9),
    });
  });

  test('there and back is the same, in every convention that has an equivalent', () => {
    const positive = fc.double({ min: 1e-3, max: 1e3, noNaN: true });
    fc.assert(
      fc.property(
        positive,
        positive,
        fc.double({ min: 0.1, max: 0.24, noNaN: true }),
        fc.constantFrom('parallel', 'standard', 'series'),
        fc.constantFrom('seconds', 'ticks'),
        (kp, integral, share, form, timeBase) => {
          const canonical: Gains = {
            kp,
            ki: kp / integral,
            kd: kp * integral * share,
            zone: 0.3,
            hold: 0.1,
            pace: 0.02,
          };
          const convention: Convention = { form, timeBase, outputUnit: 'volts', fullOutput: 12, period: 0.01 };
          const back = fromConvention(toConvention(canonical, 1, convention), 1, convention);
          for (const name of ['kp', 'ki', 'kd', 'hold', 'pace'] as const)
            expect(back[name] / canonical[name]).toBeCloseTo(1, 9);
          expect(back.zone).toBe(0.3);
        },
      ),
    );
  });

  test('a controller of each form gives the same output on a recorded error to 1e-12', () => {
    // The tick is ours; the other three are written here from their textbook definitions.
    const period = 0.02;
    const canonical = gains(1.7, 0.9, 0.21);
    const errors = Float64Array.from({ length: 300 }, (_, k) => Math.sin(k / 17) + 0.3 * Math.cos(k / 5));
    const settings: ControllerSettings = {
      ...starter('lift').controller,
      period,
      output: { unit: 'fraction', min: -1e6, max: 1e6 },
    };
    const loop = {
      settings,
      gains: canonical,
      quantity: 'position' as const,
      continuous: null,
      holdShape: { kind: 'none' as const },
      outputCap: 1,
    };
    const controller = createController(loop);
    const own = Array.from(errors, (error, k) => tick(controller, k * period, error, 0, 0));
    const standard = toConvention(canonical, 1, { ...plain, form: 'standard' });
    const ticks = toConvention(canonical, 1, { ...plain, timeBase: 'ticks' });
    if (standard.form === 'parallel' || ticks.form !== 'parallel') throw new Error('asked for others');
    let sum = 0;
    let count = 0;
    errors.forEach((error, k) => {
      const before = errors[Math.max(0, k - 1)] ?? 0;
      if (k > 0) {
        sum += error * period;
        count += error;
      }
      const slope = k > 0 ? (error - before) / period : 0;
      const byStandard =
        standard.gain *
        (error + sum / (standard.integralTime ?? Number.POSITIVE_INFINITY) + standard.derivativeTime * slope);
      const byTicks = ticks.kp * error + ticks.ki * count + ticks.kd * (k > 0 ? error - before : 0);
      const scale = Math.max(1, Math.abs(own[k] ?? 0));
      expect(Math.abs((own[k] ?? 0) - byStandard) / scale).toBeLessThan(1e-12);
      expect(Math.abs((own[k] ?? 0) - byTicks) / scale).toBeLessThan(1e-12);
    });
  });

  test('are shown with the units that a person enters them in', () => {
    const wrist = starter('wrist');
    const convention = conventionOf(wrist.controller);
    const entered = toConvention({ ...gains(2, 0.5, 0.1), zone: 3 }, 100, convention);
    expect(gainLines(entered, convention, 'deg').map(({ label, unit }) => `${label} ${unit}`)).toEqual([
      'Kp %/deg',
      'Ki %/deg/tick',
      'Kd %/deg·tick',
      'zone deg',
    ]);
  });
});
