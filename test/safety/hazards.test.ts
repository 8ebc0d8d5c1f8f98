import { describe, expect, test } from 'vitest';
import { NO_GAINS } from '../../src/controller/settings.ts';
import { coastOpen } from '../../src/safety/coasting.ts';
import { hazardFiguresOf, REACTION } from '../../src/safety/hazards.ts';
import { load, made, planned, response } from './made.ts';

/** Half output all the way: kp is so large that the output sits on its cap until the setpoint. */
const full = planned({ gains: { ...NO_GAINS, kp: 1e6 }, move: { from: 0, to: 30 }, outputCap: 0.5, duration: 4 });

describe('travel of a trial', () => {
  test('on its cap for 4 s, then 0.7 s late, then coasting: the closed forms, one after the other', () => {
    // τ·v′ = −v + K(u − c): v → K(u − c) = 1.38 m/s; x(4) = v∞(t − τ(1 − e^(−t/τ))); 13.8 lags on, v is v∞ to 2e-6.
    const model = response();
    const steady = 3 * (0.5 - 0.04);
    const x4 = steady * (4 - 0.3 * (1 - Math.exp(-4 / 0.3)));
    const figures = hazardFiguresOf(made({ limits: { min: -1, max: 40, outputCap: 1 } }), [model], full);
    expect(figures.topSpeed).toBeCloseTo(steady, 3);
    expect(figures.travelForward).toBeCloseTo(x4 + steady * REACTION + coastOpen(model, steady).distance, 2);
    expect(figures.travelBack).toBe(0);
  });

  test('twenty draws show their worst, not their middle', () => {
    const draws = Array.from({ length: 20 }, (_, k) => response({ topSpeed: 2 + k / 10 }));
    const all = hazardFiguresOf(made(), draws, full);
    const [fastest] = draws.slice(-1);
    if (fastest === undefined) throw new Error('there are twenty');
    expect(all.travelForward).toBeCloseTo(hazardFiguresOf(made(), [fastest], full).travelForward ?? Number.NaN, 9);
  });

  test('a wider-swinging loop reaches farther than the move on both sides', () => {
    const wild = planned({ gains: { ...NO_GAINS, kp: 40 }, outputCap: 1 });
    const figures = hazardFiguresOf(made(), [response({ delay: 0.1 })], wild);
    expect(figures.travelForward).toBeGreaterThan(1.5);
    expect(figures.travelBack).toBeGreaterThan(0);
  });

  test('a drivetrain under a speed loop goes places, too: 2 m/s for 2 s, late and coasting', () => {
    const drive = made({ quantity: 'speed', unit: 'm/s', limits: { min: null, max: null, outputCap: 1 } });
    const steady = planned({ gains: { ...NO_GAINS, kp: 5, pace: 1 / 3 }, move: { from: 2, to: 2 }, outputCap: 1 });
    const model = response();
    const figures = hazardFiguresOf(drive, [model], steady);
    const speed = figures.topSpeed ?? Number.NaN;
    expect(speed).toBeCloseTo(2, 1);
    const whole = 2 * 2 + speed * REACTION + coastOpen(model, speed).distance;
    expect(Math.abs((figures.travelForward ?? Number.NaN) - whole)).toBeLessThan(0.05 * whole);
  });
});

describe('what its own weight does', () => {
  const lift = made({ kind: 'lift', load: { ...load, mass: 9.5 }, limits: { min: 0, max: 1.4, outputCap: 1 } });
  const move = planned({ move: { from: 0.4, to: 0.8 } });

  test('a lift that its drag cannot carry reaches its lower limit, and coasts down to it', () => {
    const figures = hazardFiguresOf(lift, [response({ topSpeed: 0.5, hold: 0.2 })], move);
    expect(figures.travelBack).toBeGreaterThanOrEqual(0.4);
    expect(figures.coast).toBeGreaterThanOrEqual(0.4);
    expect(figures.coastShorted).toBeGreaterThanOrEqual(0.4);
  });

  test('one that its drag carries stays', () => {
    const carried = response({ topSpeed: 0.5, hold: 0.03, drag: 0.05, dragBack: 0.05 });
    expect(hazardFiguresOf(lift, [carried], move).travelBack).toBeLessThan(0.1);
  });

  test('with no limit below, how far it falls is not known', () => {
    const open = { ...lift, limits: { min: null, max: 1.4, outputCap: 1 } };
    const figures = hazardFiguresOf(open, [response({ hold: 0.2 })], move);
    expect(figures.travelBack).toBeNull();
    expect(figures.coast).toBeNull();
    expect(figures.drop).toBeNull();
  });

  test('an arm that may pass the upright can fall to either side', () => {
    const arm = made({
      kind: 'arm',
      unit: 'deg',
      load: { mass: 4, inertia: null, centreOfMass: 0.4, levelAngle: 0 },
      limits: { min: -30, max: 200, outputCap: 1 },
      target: { tolerance: 1, overshoot: 5, settlingTime: 1, moves: [[45, 120]] },
    });
    const model = response({ topSpeed: 300, lag: 0.1, hold: 0.3 });
    const swing = planned({ gains: { ...NO_GAINS, kp: 0.02 }, move: { from: 45, to: 120 }, outputCap: 0.6 });
    const figures = hazardFiguresOf(arm, [model], swing);
    expect(figures.travelBack).toBeGreaterThanOrEqual(75);
    expect(figures.travelForward).toBeGreaterThanOrEqual(155);
  });
});

test('nothing known gives no figure at all, never a small one', () => {
  for (const draws of [null, []]) {
    const { energyIsLeast, ...figures } = hazardFiguresOf(made(), draws, planned());
    expect(new Set(Object.values(figures))).toEqual(new Set([null]));
    expect(energyIsLeast).toBe(true);
  }
});
