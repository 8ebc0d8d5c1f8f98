import { describe, expect, test } from 'vitest';
import { advance, startMotion } from '../../src/plant/motion.ts';
import { respond } from '../../src/plant/respond.ts';
import { motorForce, rigidLawOf, startDirection } from '../../src/plant/rigid-law.ts';
import { plantOf } from '../trial/simulate-fixture.ts';

describe('a zero-order hold of K/(s(Ts + 1))', () => {
  test.each([
    // Ogata, Discrete-Time Control Systems, prints the first (mem); the others closed form, recomputed in Python and Octave.
    [1, 1, 1, 0.36787944, 0.26424112],
    [2, 0.1, 0.02, 0.0037461506, 0.0035046193],
    [2, 0.2, 0.02, 1.93497e-3, 1.87154e-3],
  ])('K %f, T %f, h %f: (b1 z + b2)/((z − 1)(z − E))', (k, lag, h, b1, b2) => {
    const time = Float64Array.from([0, 1, 2, 3], (n) => n * h);
    const y = respond(plantOf(k, lag), { position: 0, speed: 0 }, time, Float64Array.of(1, 0, 0, 0));
    const e = Math.exp(-h / lag);
    expect(y[1]).toBeCloseTo(b1, 8);
    // y[2] = (1 + E)·y[1] + b2, y[3] = (1 + E)·y[2] − E·y[1]
    expect((y[2] ?? 0) - (1 + e) * (y[1] ?? 0)).toBeCloseTo(b2, 8);
    expect(y[3]).toBeCloseTo((1 + e) * (y[2] ?? 0) - e * (y[1] ?? 0), 12);
  });

  test('the motor position plant of the Michigan control tutorials at 1 ms: pole 0.942494', () => {
    // Open-source tutorial (University of Michigan, motor position; mem), reduced: 35.8268 rad/s a volt, 0.0168852 s.
    const time = Float64Array.from({ length: 50 }, (_, n) => n * 0.001);
    const y = respond(plantOf(35.8268, 0.0168852), { position: 0, speed: 0 }, time, new Float64Array(50).fill(1, 0, 1));
    const slopes = [1, 2].map((n) => (y[n + 1] ?? 0) - (y[n] ?? 0));
    expect((slopes[1] ?? 0) / (slopes[0] ?? 1)).toBeCloseTo(0.942494, 5);
  });
});

describe('coasting and falling', () => {
  test('from 2 m/s with K 3, τ 0.3, drag 0.04 and the motor shorted: 0.86150 s, 0.49662 m', () => {
    // Closed form: t = τ·ln(1 + v/(K·c)), x = τ·v − K·c·t.
    const plant = plantOf(3, 0.3, { drag: 0.04, breakaway: 0.06 });
    const time = Float64Array.of(0, 0.8614, 0.8616, 2);
    const y = respond(plant, { position: 0, speed: 2 }, time, new Float64Array(4));
    expect(y[3]).toBeCloseTo(0.49662, 5);
    expect(y[1]).toBeLessThan(y[3] ?? 0);
    expect(y[2]).toBe(y[3]);
  });

  test('a hung load let go falls freely where the motor takes nothing: 1.1 m in 0.4736 s', () => {
    // Closed form: √(2·1.1/9.80665). A long lag is a motor too weak to brake; K·h/τ = g.
    const plant = plantOf(9.80665e6 / 0.25, 1e6, { hold: 0.25 });
    const y = respond(plant, { position: 0, speed: 0 }, Float64Array.of(0, 0.473646), Float64Array.of(0, 0));
    expect(y[1]).toBeCloseTo(-1.1, 4);
  });
});

describe('the ends of the scale', () => {
  test('without lag the speed is at its end value at once', () => {
    const plant = plantOf(2, 0, { drag: 0.1, breakaway: 0.2 });
    const y = respond(
      plant,
      { position: 0, speed: 0 },
      Float64Array.of(0, 0.5, 1, 1.5),
      Float64Array.of(0.6, -0.6, 0.15, 0),
    );
    // 2·(0.6 − 0.1)·0.5 forward, the same back, then stuck.
    expect([...y]).toEqual([0, 0.5, 0, 0]);
  });

  test('an endless lag is a constant acceleration, to rounding', () => {
    const lag = 1e15;
    const y = respond(
      plantOf(3 * lag, lag),
      { position: 1, speed: 2 },
      Float64Array.of(0, 0.1, 0.7),
      Float64Array.of(0.5, -1, 0),
    );
    // Closed form: x + vt + at²/2 with a = 1.5, then −3.
    const middle = 1 + 0.2 + 0.75 * 0.01;
    expect(Math.abs((y[1] ?? 0) - middle)).toBeLessThan(1e-15);
    expect(Math.abs((y[2] ?? 0) - (middle + 2.15 * 0.6 - 1.5 * 0.36))).toBeLessThan(3e-15);
  });

  test('a step of 1e-12 s loses nothing', () => {
    const y = respond(plantOf(2, 0.1), { position: 0, speed: 0 }, Float64Array.of(0, 1e-12), Float64Array.of(1, 1));
    expect(Math.abs((y[1] ?? 0) / (20 * 0.5e-24) - 1)).toBeLessThan(1e-10);
  });
});

describe('rest and motion', () => {
  test('exactly at breakaway it stays; a hair above it goes', () => {
    const plant = plantOf(2, 0.1, { drag: 0.05, breakaway: 0.07 });
    const law = rigidLawOf(plant);
    expect(startDirection(law, 0.07, 0, 0)).toBe(0);
    expect(startDirection(law, 0.07 + 1e-15, 0, 0)).toBe(1);
    expect(startDirection(law, -0.07, 0, 0)).toBe(0);
    expect(startDirection(law, -0.08, 0, 0)).toBe(-1);
  });

  test('friction meets a push that cannot move it, and no more: Karnopp’s rule', () => {
    // Karnopp, J. Dyn. Sys. Meas. Control 107 (1985) 100 (mem): Fs 1.5, Fc 1.4; 0.9 is held, 1.6 leaves 0.2 to accelerate.
    const motion = startMotion(plantOf(1e6, 1e6, { drag: 1.4, breakaway: 1.5 }), { position: 0, speed: 0 });
    advance(motion, 0.9, 1);
    expect(motion.state.speed).toBe(0);
    advance(motion, 1.6, 1e-3);
    expect(motion.state.speed / 1e-3).toBeCloseTo(0.2, 5);
  });

  test('a push that ends under the way crosses zero speed twice in one tick', () => {
    // Moves back at −1 under a push forward that turns within the tick: −1 → 0 → forward, then the delayed output brakes it to 0 again.
    const plant = plantOf(2, 0.01, { drag: 0.02, breakaway: 0.03 });
    const fine = startMotion(plant, { position: 0, speed: -1 });
    const coarse = startMotion(plant, { position: 0, speed: -1 });
    for (let n = 0; n < 1000; n++) advance(fine, n < 500 ? 0.8 : -0.02, 2e-5);
    advance(coarse, 0.8, 0.01);
    advance(coarse, -0.02, 0.01);
    expect(coarse.state.position).toBeCloseTo(fine.state.position, 12);
    expect(coarse.state.speed).toBeCloseTo(fine.state.speed, 12);
  });

  test('a stop takes all speed, holds what pushes into it, and lets go of what pulls away', () => {
    const motion = startMotion(plantOf(2, 0.1, {}, { stops: { min: null, max: 0.3 } }), { position: 0, speed: 0 });
    advance(motion, 1, 1);
    expect([motion.state.position, motion.state.speed]).toEqual([0.3, 0]);
    advance(motion, 1, 1);
    expect([motion.state.position, motion.state.speed]).toEqual([0.3, 0]);
    advance(motion, -1, 0.1);
    expect(motion.state.position).toBeLessThan(0.3);
  });
});

describe('the supply', () => {
  test('12.6 V behind 15 mΩ: one 0.08 Ω motor stalled draws 132.63 A at 10.6105 V, two leave 9.16364 V', () => {
    // Closed form: V = V_oc/(1 + n·R_s/R); current over the stall current of a stiff supply is the same number.
    const force = (count: number) => motorForce(rigidLawOf(plantOf(1, 1, {}, { sag: (count * 0.015) / 0.08 })), 1, 0);
    expect(force(1) * (12.6 / 0.08)).toBeCloseTo(132.63, 2);
    expect(force(1) * 12.6).toBeCloseTo(10.6105, 4);
    expect(force(2) * 12.6).toBeCloseTo(9.16364, 5);
  });

  test('does not sag while the motor returns current', () => {
    const law = rigidLawOf(plantOf(1, 1, {}, { sag: 0.5 }));
    expect(motorForce(law, 0.5, 0.8)).toBeCloseTo(-0.3, 12);
    expect(motorForce(law, 0.5, 0.2)).toBeCloseTo(0.3 / 1.125, 12);
  });

  test('a current limit is a constant push: v = at from rest', () => {
    const motion = startMotion(plantOf(10, 1, {}, { forceLimit: 0.4 }), { position: 0, speed: 0 });
    advance(motion, 1, 0.5);
    expect(motion.state.speed).toBeCloseTo(0.4 * 10 * 0.5, 12);
    expect(motion.state.position).toBeCloseTo(0.5 * 4 * 0.25, 12);
  });
});

test('an arm swinging down without friction passes the bottom at √(2mgL/J)', () => {
  // Closed form, 3.5 kg at 0.45 m, J 1 kg·m²: 5.557963 rad/s. The motor takes nothing: a lag of 1e7 s.
  const weight = 3.5 * 9.80665 * 0.45;
  const plant = plantOf(weight * 1e7, 1e7, { hold: 1 }, { gravity: { kind: 'cosine', level: 0, radiansPerUnit: 1 } });
  const motion = startMotion(plant, { position: 0, speed: 0 });
  let fastest = 0;
  for (let n = 0; n < 2000; n++) {
    advance(motion, 0, 0.001);
    fastest = Math.max(fastest, -motion.state.speed);
  }
  expect(fastest).toBeCloseTo(5.557963, 4);
});
