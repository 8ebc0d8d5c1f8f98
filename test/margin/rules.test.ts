import { describe, expect, test } from 'vitest';
import {
  amigo,
  amigoIntegrating,
  chienHronesReswick,
  cohenCoon,
  firstIntegralGain,
  internalModel,
  lambdaTuning,
  parallelOf,
  placePd,
  placePi,
  placePid,
  type RuleSetting,
  relayUltimateGain,
  simc,
  simcIntegrating,
  tyreusLuyben,
  ultimateOfIntegrating,
  ultimateOfLag,
  zieglerNicholsStep,
  zieglerNicholsUltimate,
} from '../../src/margin/rules.ts';

const near = (found: RuleSetting, gain: number, integralTime: number | null, derivativeTime: number | null = null) => {
  expect(found.gain / gain).toBeCloseTo(1, 4);
  if (integralTime === null) expect(found.integralTime).toBeNull();
  else expect((found.integralTime ?? 0) / integralTime).toBeCloseTo(1, 4);
  if (derivativeTime === null) expect(found.derivativeTime).toBeNull();
  else expect((found.derivativeTime ?? 0) / derivativeTime).toBeCloseTo(1, 4);
};

// A process of the catalogue: K = 2, T = 10, L = 2, so that KL/T = 0.4.
const slow = { gain: 2, lag: 10, deadTime: 2 };
const half = { gain: 1, lag: 1, deadTime: 0.5 };

describe('published rules', () => {
  test('Ziegler–Nichols (1942), step form', () => {
    near(zieglerNicholsStep(slow, 'P'), 2.5, null);
    near(zieglerNicholsStep(slow, 'PI'), 2.25, 6.66667);
    near(zieglerNicholsStep(slow, 'PID'), 3, 4, 1);
    // ki = 0.27T/(KL²): erratum to Åström & Murray (11.10a).
    expect(parallelOf(zieglerNicholsStep(slow, 'PI')).ki).toBeCloseTo(0.3375, 6);
  });

  test('Ziegler–Nichols (1942), ultimate form, on 1/(s+1)³', () => {
    // Ku = sec(π/3)³ = 8, Tu = 2π/tan(π/3) = 3.6276 (closed form).
    const period = (2 * Math.PI) / Math.tan(Math.PI / 3);
    near(zieglerNicholsUltimate(8, period, 'PID'), 4.8, 1.8138, 0.45345);
    near(zieglerNicholsUltimate(8, period, 'PI'), 3.6, 3.023);
    near(zieglerNicholsUltimate(8, period, 'P'), 4, null);
    expect(parallelOf(zieglerNicholsUltimate(8, period, 'PID')).kd).toBeCloseTo(2.17656, 4);
  });

  test('Tyreus–Luyben (1992)', () => {
    near(tyreusLuyben(8, 3.6276, 'PID'), 3.63636, 7.98072, 0.57581);
    near(tyreusLuyben(8, 3.6276, 'PI'), 2.5, 7.98072);
  });

  test('Chien–Hrones–Reswick (1952; mem)', () => {
    near(chienHronesReswick(half, 0, 'PID'), 1.2, 1, 0.25);
    near(chienHronesReswick(half, 20, 'PID'), 1.9, 1.35, 0.235);
    near(chienHronesReswick(slow, 0, 'PI'), 0.875, 12);
    near(chienHronesReswick(slow, 20, 'PI'), 1.5, 10);
  });

  test('Cohen–Coon (1953)', () => {
    near(cohenCoon(half), 2.91667, 1.02941, 0.166667);
    near(cohenCoon(slow), 3.45833, 4.54795, 0.701754);
  });

  test('SIMC (Skogestad 2003)', () => {
    near(simc({ gain: 1, lag: 2.5, deadTime: 1.47 }), 0.85034, 2.5);
    near(simc({ gain: 1, lag: 20, deadTime: 1 }, 1), 10, 8);
    near(simcIntegrating({ gain: 1, deadTime: 1 }), 0.5, 8);
  });

  test('AMIGO (Åström & Hägglund 2004)', () => {
    near(amigo(half, 'PID'), 1.1, 0.833333, 0.217391);
    near(amigo(half, 'PI'), 0.405556, 0.917857);
    // Their lag-dominated example, T = 1.04, L = 0.075 (mem).
    near(amigo({ gain: 1, lag: 1.04, deadTime: 0.075 }, 'PID'), 6.44, 0.36117, 0.036706);
    near(amigoIntegrating({ gain: 1, deadTime: 1 }, 'PID'), 0.45, 8, 0.5);
    near(amigoIntegrating({ gain: 1, deadTime: 1 }, 'PI'), 0.35, 13.4);
  });

  test('λ-tuning and the internal-model PID on the same process', () => {
    near(lambdaTuning(slow, 6), 0.625, 10);
    near(internalModel(slow, 6), 0.785714, 11, 0.909091);
  });

  test('relay: 4d/(πa), with hysteresis, and its known bias on e^(−s)/s', () => {
    // Åström & Hägglund (1984).
    expect(relayUltimateGain(5, 2)).toBeCloseTo(3.183099, 6);
    expect(relayUltimateGain(5, 2, 0.5)).toBeCloseTo(3.28749, 5);
    // The exact cycle of K·e^(−Ls)/s has amplitude dKL: the estimate is 8/π² of the true gain.
    expect(relayUltimateGain(1, 1) / ultimateOfIntegrating({ gain: 1, deadTime: 1 }).gain).toBeCloseTo(
      8 / Math.PI ** 2,
      9,
    );
    // On 1/(s+1)³ the exact relay cycle has amplitude 0.163061: 7.808, 2.4 % low of 8.
    expect(relayUltimateGain(1, 0.1630615)).toBeCloseTo(7.80834, 3);
  });

  test.each([
    [0.1, 16.35055, 0.385],
    [0.5, 3.80688, 1.710551],
    [2, 1.5198, 5.490064],
  ])('ultimate gain of e^(−%fs)/(s+1)', (deadTime, gain, period) => {
    const found = ultimateOfLag({ gain: 1, lag: 1, deadTime });
    expect(found.gain).toBeCloseTo(gain, 4);
    expect(found.period).toBeCloseTo(period, 4);
  });

  test('pole placement', () => {
    const pd = placePd(2, 0.2, 10, 0.8);
    expect(pd.kp).toBeCloseTo(10, 9);
    expect(pd.kd).toBeCloseTo(1.1, 9);
    const pi = placePi(3, 0.2, 15, 0.8);
    expect(pi.kp).toBeCloseTo(1.266667, 6);
    expect(pi.ki).toBeCloseTo(15, 9);
    const pid = placePid(2, 0.1, 20, 0.7, 0.5);
    expect([pid.kp, pid.ki, pid.kd].map((value) => Number(value.toFixed(6)))).toEqual([34, 200, 1.4]);
  });

  test('0.2 of error, 10 % output, 1 s: Ki = 0.5 (common practice, no source)', () => {
    expect(firstIntegralGain(0.1, 0.2, 1)).toBeCloseTo(0.5, 12);
  });
});
