import { describe, expect, test } from 'vitest';
import type { Gains } from '../../src/controller/settings.ts';
import { learn } from '../../src/learn/learn.ts';
import { inBand, predict } from '../../src/learn/predict.ts';
import { drawPrior, priorOf } from '../../src/learn/prior.ts';
import { plantWith } from '../../src/mechanism/plant-of.ts';
import type { Move, Profile } from '../../src/mechanism/profile.ts';
import type { ResponseModel } from '../../src/plant/response-model.ts';
import { readingOf, simulateTrial } from '../../src/trial/simulate.ts';
import { starter } from '../fixtures/starters.ts';

const NONE: Gains = { kp: 0, ki: 0, kd: 0, zone: null, hold: 0, pace: 0 };

const trialOf = (profile: Profile, truth: ResponseModel, gains: Gains, move: Move, seed: number) => ({
  samples: simulateTrial(
    { plant: plantWith(profile, truth), reading: readingOf(profile) },
    {
      controller: profile.controller,
      gains,
      move,
      duration: 2.5,
      outputCap: 1,
      continuous: profile.continuous,
      shape: null,
    },
    seed,
  ),
  gains,
  outputCap: 1,
  move,
});

/** A gentle P gain for a mechanism: about critical damping. */
const gentle = (truth: ResponseModel, share: number): Gains => ({
  ...NONE,
  kp: share / (4 * truth.topSpeed * (truth.lag + 0.03)),
});

const turret = starter('turret');
const nameplate = priorOf(turret).response;

describe('learning', () => {
  test('finds the truth from one trial of a machine that its nameplate misjudges', () => {
    const truth: ResponseModel = {
      ...nameplate,
      topSpeed: nameplate.topSpeed * 0.75,
      lag: nameplate.lag * 1.3,
      drag: 0.08,
      dragBack: 0.08,
      breakaway: 0.1,
      breakawayBack: 0.1,
      delay: 0.02,
    };
    const learnt = learn({
      profile: turret,
      trials: [trialOf(turret, truth, gentle(truth, 2), { from: 0, to: 90 }, 1)],
      draws: 64,
      seed: 1,
    });
    expect(learnt.response.topSpeed / truth.topSpeed).toBeCloseTo(1, 1);
    expect(learnt.response.lag / truth.lag).toBeCloseTo(1, 1);
    expect(learnt.response.drag).toBeCloseTo(0.08, 2);
    expect(Math.abs(learnt.response.delay - 0.02)).toBeLessThan(0.004);
    expect(learnt.fit).toBeGreaterThan(99);
    expect(learnt.usable).toBe(true);
  });

  test('rebuilds the output from the gains where the log has none, and says so', () => {
    const trial = trialOf(turret, nameplate, gentle(nameplate, 2), { from: 0, to: 90 }, 2);
    const learnt = learn({
      profile: turret,
      trials: [{ ...trial, samples: { ...trial.samples, output: null, parts: null } }],
      draws: 8,
      seed: 1,
    });
    expect(learnt.outputRebuilt).toBe(true);
    expect(learnt.warnings.join(' ')).toMatch(/rebuilt/);
    expect(learnt.response.topSpeed / nameplate.topSpeed).toBeCloseTo(1, 1);
  });

  test('notices that an output acted one row earlier, and moves it', () => {
    const trial = trialOf(turret, nameplate, gentle(nameplate, 4), { from: 0, to: 90 }, 3);
    const output = trial.samples.output ?? new Float64Array(0);
    const late = Float64Array.from(output, (_, row) => output[Math.max(0, row - 1)] ?? 0);
    late[0] = 0;
    const learnt = learn({
      profile: turret,
      trials: [{ ...trial, samples: { ...trial.samples, output: late } }],
      draws: 8,
      seed: 1,
    });
    expect(learnt.rowShift).toBe(1);
    expect(learn({ profile: turret, trials: [trial], draws: 8, seed: 1 }).rowShift).toBe(0);
  });

  test('is the same for the same seed, and its draws are valid mechanisms', () => {
    const request = {
      profile: turret,
      trials: [trialOf(turret, nameplate, gentle(nameplate, 2), { from: 0, to: 90 }, 4)],
      draws: 64,
      seed: 9,
    };
    expect(learn(request)).toEqual(learn(request));
    for (const draw of learn(request).draws) {
      expect(draw.topSpeed).toBeGreaterThan(0);
      expect(draw.lag).toBeGreaterThan(0);
      expect(draw.breakaway).toBeGreaterThanOrEqual(draw.drag);
      expect(draw.delay).toBeGreaterThanOrEqual(0);
    }
  });

  test.each([
    ['a reading that never changes', (values: Float64Array) => values.fill(3)],
    ['values that are not numbers', (values: Float64Array) => values.fill(Number.NaN, 20, 80)],
  ])('%s teach nothing, and it says so', (_, spoil) => {
    const trial = trialOf(turret, nameplate, gentle(nameplate, 2), { from: 0, to: 90 }, 5);
    const measured = spoil(Float64Array.from(trial.samples.measured));
    const learnt = learn({
      profile: turret,
      trials: [{ ...trial, samples: { ...trial.samples, measured } }],
      draws: 8,
      seed: 1,
    });
    expect(learnt.usable).toBe(false);
    expect(learnt.fit).toBeNull();
    expect(learnt.warnings.join(' ')).toMatch(/teaches nothing/);
  });

  test('a few rows without a number, and a glitch of one row, do not spoil the rest', () => {
    const trial = trialOf(turret, nameplate, gentle(nameplate, 4), { from: 0, to: 90 }, 7);
    const measured = Float64Array.from(trial.samples.measured).fill(Number.NaN, 20, 24);
    measured[12] = 900;
    const whole = learn({ profile: turret, trials: [trial], draws: 8, seed: 1 });
    const spoilt = learn({
      profile: turret,
      trials: [{ ...trial, samples: { ...trial.samples, measured } }],
      draws: 8,
      seed: 1,
    });
    expect(spoilt.usable).toBe(true);
    expect(spoilt.warnings.join(' ')).toMatch(/4 rows hold no number/);
    expect(spoilt.response.topSpeed / whole.response.topSpeed).toBeCloseTo(1, 2);
  });

  test('started from what was learnt before, it ends where it would have without', () => {
    const first = trialOf(turret, nameplate, gentle(nameplate, 2), { from: 0, to: 90 }, 8);
    const second = trialOf(turret, nameplate, gentle(nameplate, 5), { from: 90, to: 0 }, 9);
    const request = { profile: turret, draws: 8, seed: 1 };
    const before = learn({ ...request, trials: [first] });
    const cold = learn({ ...request, trials: [first, second] });
    const warm = learn({ ...request, trials: [first, second], from: before });
    for (const name of ['topSpeed', 'lag', 'drag'] as const) {
      expect(warm.response[name] / cold.response[name]).toBeCloseTo(1, 2);
    }
  });

  test('the speed logged of a position mechanism teaches the same top speed and lag', () => {
    // Open loop: half output for 1.5 s, then none; speed has a closed form, v = K(u − c)(1 − e^(−t/τ)).
    const { topSpeed: K, lag: tau, drag: c } = { topSpeed: 700, lag: 0.2, drag: 0.06 };
    const time = Float64Array.from({ length: 76 }, (_, k) => 0.02 * k);
    const measured = time.map((t) => K * (0.5 - c) * -Math.expm1(-t / tau));
    const samples = {
      time,
      setpoint: new Float64Array(time.length),
      measured,
      output: new Float64Array(time.length).fill(0.5),
      supply: null,
      current: null,
      enabled: null,
      parts: null,
    };
    const plain: Profile = { ...turret, supply: null, sensor: { resolution: 0.09, noise: 0, delay: 0 } };
    const learnt = learn({
      profile: plain,
      trials: [{ samples, gains: null, outputCap: 1, move: null, quantity: 'speed' }],
      draws: 8,
      seed: 1,
    });
    expect(learnt.fit).toBeGreaterThan(99.5);
    expect(learnt.response.lag / tau).toBeCloseTo(1, 1);
    // One level of output tells K·(u − c), not both.
    expect((learnt.response.topSpeed * (0.5 - learnt.response.drag)) / (K * (0.5 - c))).toBeCloseTo(1, 2);
  });

  test('a supply that was logged scales the output', () => {
    const trial = trialOf(
      turret,
      { ...nameplate, topSpeed: nameplate.topSpeed * 0.8 },
      gentle(nameplate, 2),
      { from: 0, to: 90 },
      6,
    );
    const supply = new Float64Array(trial.samples.time.length).fill((turret.supply?.openCircuit ?? 12) * 0.8);
    const profile = { ...turret, supply: turret.supply && { ...turret.supply, resistance: 0 } };
    const learnt = learn({ profile, trials: [{ ...trial, samples: { ...trial.samples, supply } }], draws: 8, seed: 1 });
    expect(learnt.response.topSpeed / nameplate.topSpeed).toBeCloseTo(1, 1);
  });
});

describe('what is learnt is calibrated', () => {
  const truths = drawPrior(priorOf(turret), 40, 77);

  test('95 % intervals hold the truth for 85 % or more of what can be learnt', () => {
    let held = 0;
    let count = 0;
    truths.forEach((truth, k) => {
      const trials = [
        trialOf(turret, truth, gentle(truth, 2), { from: 0, to: 90 }, 100 + k),
        trialOf(turret, truth, gentle(truth, 5), { from: 90, to: 0 }, 200 + k),
      ];
      const learnt = learn({ profile: turret, trials, draws: 32, seed: k });
      for (const name of ['topSpeed', 'lag', 'drag', 'delay'] as const) {
        if (learnt.unlearnt.includes(name)) continue;
        const { low, high } = learnt.intervals[name];
        count++;
        // A dead time can be told to a hundredth of a tick at best.
        const slack = name === 'delay' ? 0.01 * turret.controller.period : 0;
        if (truth[name] >= low - slack && truth[name] <= high + slack) held++;
      }
    });
    expect(held / count).toBeGreaterThanOrEqual(0.85);
  });

  test('the band holds the next trial in 85 % or more of the cases, and not by being useless', () => {
    let inside = 0;
    let width = 0;
    const move = { from: 0, to: 90 };
    truths.forEach((truth, k) => {
      const learnt = learn({
        profile: turret,
        trials: [trialOf(turret, truth, gentle(truth, 2), move, 300 + k)],
        draws: 64,
        seed: k,
      });
      const gains = { ...gentle(truth, 6), kd: 0.3 * truth.lag * gentle(truth, 6).kp };
      const { band } = predict({
        profile: turret,
        draws: learnt.draws,
        residual: learnt.residual,
        gains,
        move,
        duration: 2.5,
        outputCap: 1,
        seed: k,
      });
      if (inBand(trialOf(turret, truth, gains, move, 400 + k).samples, band, 360).inside) inside++;
      for (let row = 0; row < band.time.length; row++)
        width += ((band.high[row] ?? 0) - (band.low[row] ?? 0)) / band.time.length / truths.length;
    });
    expect(inside / truths.length).toBeGreaterThanOrEqual(0.85);
    expect(width).toBeLessThan(0.12 * 90);
  });
});
