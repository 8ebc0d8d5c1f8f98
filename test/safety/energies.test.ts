import { describe, expect, test } from 'vitest';
import { coastOpen, coastShorted } from '../../src/safety/coasting.ts';
import { dropOf, energyOfMass, freeFall, kineticEnergy, rimSpeedOf } from '../../src/safety/energies.ts';
import { load, made, response } from './made.ts';

const motor = { nominalVoltage: 12, freeSpeed: 5000, freeCurrent: 2, stallTorque: 2.4, stallCurrent: 130, count: 2 };

describe('kinetic energy, ½·m·v² and ½·J·ω² (closed forms)', () => {
  test('45 kg at 3 m/s: 202.5 J; 20 kg at 3 m/s: 90 J', () => {
    expect(kineticEnergy(made({ load: { ...load, mass: 45 } }), 3)).toBeCloseTo(202.5, 9);
    expect(energyOfMass(20, 3)).toBeCloseTo(90, 9);
  });

  test('a flywheel of 0.05 kg·m² at 300 rad/s: 2250 J, whatever unit it is read in', () => {
    const inertia = { ...load, inertia: 0.05 };
    const wheel = made({ kind: 'spin', quantity: 'speed', load: inertia });
    expect(kineticEnergy({ ...wheel, unit: 'rad/s' }, 300)).toBeCloseTo(2250, 9);
    expect(kineticEnergy({ ...wheel, unit: 'rpm' }, (300 * 60) / (2 * Math.PI))).toBeCloseTo(2250, 9);
  });

  test('the rotors count with the square of the reduction: n·J·N²/r²', () => {
    // Derived: 2 · 6e-5 · 10² / 0.05² = 4.8 kg beside 20 kg; ½ · 24.8 · 2² = 49.6 J.
    const profile = made({
      load: { ...load, mass: 20 },
      motor: { ...motor, rotorInertia: 6e-5 },
      drive: { reduction: 10, radius: 0.05, efficiency: 0.9 },
    });
    expect(kineticEnergy(profile, 2)).toBeCloseTo(49.6, 9);
  });

  test('a line that is read in turns goes through the radius of its drum', () => {
    const drum = { reduction: 10, radius: 0.05, efficiency: 0.9 };
    const profile = made({ unit: 'rad', load: { ...load, mass: 45 }, drive: drum });
    expect(kineticEnergy(profile, 3 / 0.05)).toBeCloseTo(202.5, 9);
    expect(kineticEnergy({ ...profile, drive: null }, 3 / 0.05)).toBeNull();
  });

  test('without mass or inertia there is no figure', () => {
    expect(kineticEnergy(made(), 3)).toBeNull();
    expect(kineticEnergy(made({ kind: 'turn', unit: 'rad', load: { ...load, mass: 3 } }), 3)).toBeNull();
  });
});

describe('falls, m·g·h and √(2h/g) with g = 9.80665 m/s² (CGPM 1901; ISO 80000-3)', () => {
  test('9.5 kg from 1.1 m: 102.48 J in 0.4736 s; 8 kg from 1.2 m: 94.1438 J in 0.494704 s', () => {
    expect(freeFall(9.5, 1.1).energy).toBeCloseTo(102.48, 2);
    expect(freeFall(9.5, 1.1).time).toBeCloseTo(0.4736, 4);
    expect(freeFall(8, 1.2).energy).toBeCloseTo(94.1438, 4);
    expect(freeFall(8, 1.2).time).toBeCloseTo(0.494704, 6);
  });

  const lift = made({ kind: 'lift', load: { ...load, mass: 9.5 }, limits: { min: 0.1, max: 1.4, outputCap: 1 } });

  test('a lift falls from the highest place it gets to, to its lower limit', () => {
    expect(dropOf(lift, [0.3, 1.2])?.energy).toBeCloseTo(102.48, 2);
    expect(dropOf({ ...lift, unit: 'cm', limits: { min: 10, max: 140, outputCap: 1 } }, [30, 120])?.height).toBeCloseTo(
      1.1,
      9,
    );
  });

  test('a lift whose trial is not known may fall from its upper limit', () => {
    expect(dropOf(lift, null)?.height).toBeCloseTo(1.3, 9);
  });

  test('an arm that swings over the top falls from the top, and past its lowest', () => {
    const arm = made({
      kind: 'arm',
      unit: 'deg',
      load: { mass: 4, inertia: null, centreOfMass: 0.45, levelAngle: 0 },
      limits: { min: -100, max: 170, outputCap: 1 },
    });
    // From 10° to 160° it passes 90°, where it is 0.45 m above its joint; at −90° it hangs 0.45 m below.
    expect(dropOf(arm, [10, 160])?.height).toBeCloseTo(0.9, 9);
    expect(dropOf(arm, [0, 30])?.height).toBeCloseTo(0.45 * 1.5, 9);
    expect(dropOf({ ...arm, limits: { min: 0, max: 170, outputCap: 1 } }, [0, 30])?.height).toBeCloseTo(0.225, 9);
  });

  test('an unknown limit or mass gives no figure', () => {
    expect(dropOf({ ...lift, limits: { min: null, max: 1.4, outputCap: 1 } }, [0, 1])).toBeNull();
    expect(dropOf({ ...lift, load: null }, [0, 1])).toBeNull();
    expect(dropOf(made({ load: { ...load, mass: 9.5 } }), [0, 1])).toBeNull();
  });
});

describe('coasting', () => {
  test('shorted, from 2 m/s with K 3, τ 0.3, drag 0.04: 0.86150 s and 0.49662 m', () => {
    // Closed form τ·ln(1 + v/(K·c)) and τ·v − K·c·t.
    const { time, distance } = coastShorted(response(), 2);
    expect(time).toBeCloseTo(0.8615, 5);
    expect(distance).toBeCloseTo(0.49662, 5);
  });

  test('open, drag alone: J 0.05, brake 0.5 N·m, 300 rad/s: 30 s and 4500 rad', () => {
    // K·c/τ is the brake's deceleration: 0.5/0.05 = 10 rad/s².
    const { time, distance } = coastOpen(response({ topSpeed: 500, lag: 5, drag: 0.1, dragBack: 0.1 }), 300);
    expect(time).toBeCloseTo(30, 9);
    expect(distance).toBeCloseTo(4500, 9);
  });

  test('20 kg at 3 m/s against 4 m/s²: 1.125 m and 0.75 s', () => {
    const { time, distance } = coastOpen(response({ topSpeed: 4, lag: 0.04, drag: 0.04, dragBack: 0.04 }), 3);
    expect(distance).toBeCloseTo(1.125, 9);
    expect(time).toBeCloseTo(0.75, 9);
  });

  test('it is the direction of less drag that counts, and without drag it never stops', () => {
    expect(coastOpen(response({ dragBack: 0.01 }), 1).distance).toBeCloseTo(4 * coastOpen(response(), 1).distance, 9);
    expect(coastOpen(response({ drag: 0, dragBack: 0 }), 1).time).toBe(Number.POSITIVE_INFINITY);
    expect(coastOpen(response(), 0).distance).toBe(0);
  });
});

test('rim speed is ω·r: 3000 rpm on 0.05 m is 15.708 m/s', () => {
  const drive = { reduction: 3, radius: 0.05, efficiency: 0.9 };
  const wheel = made({ kind: 'spin', quantity: 'speed', unit: 'rpm', drive });
  expect(rimSpeedOf(wheel, 3000)).toBeCloseTo(15.708, 3);
  expect(rimSpeedOf({ ...wheel, drive: null }, 3000)).toBeNull();
});
