import { describe, expect, test } from 'vitest';
import type { Gains } from '../../src/controller/settings.ts';
import { readTrial } from '../../src/trial/reading.ts';
import { simulateTrial } from '../../src/trial/simulate.ts';
import type { SimulatedMechanism } from '../../src/trial/trial.ts';
import { starter } from '../fixtures/starters.ts';

// What people who tune by hand see, and teach: common practice, no source. A drive-like plant: lag, a little drag, fine sensor.
const profile = { ...starter('drivetrain'), limits: { min: null, max: null, outputCap: 1 } };
const mechanism: SimulatedMechanism = {
  plant: {
    quantity: 'position',
    response: {
      topSpeed: 2,
      lag: 0.15,
      drag: 0.03,
      dragBack: 0.03,
      breakaway: 0.04,
      breakawayBack: 0.04,
      hold: 0,
      delay: 0.01,
    },
    gravity: { kind: 'none' },
    stops: { min: null, max: null },
    sag: 0,
    forceLimit: null,
    coupling: null,
  },
  reading: { resolution: 0.0005, noise: 0, delay: 0, period: 0, jitter: 0 },
};
const NONE: Gains = { kp: 0, ki: 0, kd: 0, zone: null, hold: 0, pace: 0 };

function trial(gains: Partial<Gains>) {
  const all = { ...NONE, ...gains };
  const move = { from: 0, to: 0.4 };
  const samples = simulateTrial(
    mechanism,
    { controller: profile.controller, gains: all, move, duration: 8, outputCap: 1, continuous: null, shape: null },
    1,
  );
  const reading = readTrial(samples, {
    profile,
    gains: all,
    move,
    outputCap: 1,
    response: null,
    reach: null,
    nameplate: null,
    promise: null,
  });
  return { ...reading, names: reading.verdicts.map((verdict) => verdict.is) };
}

describe('common practice', () => {
  test('at a fixed Kp, raising Ki tenfold twice raises the overshoot each time and ends in a growing swing', () => {
    const [small, middle, large] = [0.2, 2, 20].map((ki) => trial({ kp: 1.6, ki }));
    expect(middle?.figures.overshoot).toBeGreaterThan((small?.figures.overshoot ?? 0) + 5);
    expect(large?.figures.overshoot).toBeGreaterThan((middle?.figures.overshoot ?? 0) + 5);
    expect(small?.names).not.toContain('growing-swing');
    expect(large?.names).toContain('growing-swing');
  });

  test('a zone lowers the overshoot that the integral brings', () => {
    const always = trial({ kp: 1.6, ki: 2 });
    const zoned = trial({ kp: 1.6, ki: 2, zone: 0.05 });
    expect(zoned.figures.overshoot).toBeLessThan(0.7 * always.figures.overshoot);
  });

  test('raising Kd tenfold twice first removes the overshoot, then chatters', () => {
    const [none, small, large] = [0.03, 0.3, 3].map((kd) => trial({ kp: 4, kd }));
    expect(none?.figures.overshoot).toBeGreaterThan(10);
    expect(small?.figures.overshoot).toBeLessThan(5);
    expect(small?.names).not.toContain('chatters');
    expect(large?.names).toContain('chatters');
  });

  test('the first Ki of 0.5 (10 % output for 0.2 of error in 1 s) adds 0.1 in that second', () => {
    const stuck: SimulatedMechanism = {
      ...mechanism,
      plant: { ...mechanism.plant, response: { ...mechanism.plant.response, breakaway: 0.9, breakawayBack: 0.9 } },
    };
    const samples = simulateTrial(
      stuck,
      {
        controller: profile.controller,
        gains: { ...NONE, ki: 0.5 },
        move: { from: 0, to: 0.2 },
        duration: 1,
        outputCap: 1,
        continuous: null,
        shape: null,
      },
      1,
    );
    expect(samples.output?.at(-1)).toBeCloseTo(0.1, 9);
  });
});
