import { describe, expect, test } from 'vitest';
import { gravityOf, plantModelOf, responseOf } from '../../src/mechanism/plant-of.ts';
import type { Profile } from '../../src/mechanism/profile.ts';
import { MOTOR, profileOf } from './profile-fixture.ts';

const travel = (changes: Partial<Profile> = {}) => profileOf({ kind: 'travel', ...changes });
const relative = (seen: number | undefined, expected: number, share = 1e-5) =>
  expect(Math.abs((seen ?? Number.NaN) / expected - 1)).toBeLessThan(share);

describe('worked examples (closed form, recomputed in Python for the design)', () => {
  test('two motors, 10:1, radius 0.05 m, efficiency 0.9, 20 kg: 2.65890 m/s and 0.0615486 s', () => {
    relative(responseOf(travel())?.topSpeed, 2.6589);
    relative(responseOf(travel())?.lag, 0.0615486);
    expect(responseOf(travel())?.hold).toBe(0);
  });

  test('the same load hung needs 0.227006 of full output', () => {
    relative(responseOf(profileOf())?.hold, 0.227006);
  });

  test('an arm of 4 kg at 0.45 m on one motor, 60:1, 0.8, needs 0.153229 when level', () => {
    const arm = profileOf({
      kind: 'arm',
      unit: 'deg',
      motor: MOTOR,
      drive: { reduction: 60, radius: null, efficiency: 0.8 },
      load: { mass: 4, inertia: 1.1, centreOfMass: 0.45, levelAngle: 12 },
    });
    relative(responseOf(arm)?.hold, 0.153229);
    expect(gravityOf(arm)).toEqual({ kind: 'cosine', level: 12, radiansPerUnit: Math.PI / 180 });
  });

  // A motor of 0.02 N·m/A and V·s/rad and 0.08 Ω at 12 V: 150 A and 3 N·m stalled, 600 rad/s free.
  const plain = {
    nominalVoltage: 12,
    freeSpeed: 18000 / Math.PI,
    freeCurrent: 0,
    stallTorque: 3,
    stallCurrent: 150,
    count: 1,
  };

  test('reflected inertia: 2e-4 kg·m² at 50:1 adds 0.5, so 1.7 in all, 0.136 s and 1.0 rad/s a volt', () => {
    const joint = profileOf({
      kind: 'turn',
      unit: 'rad',
      motor: { ...plain, rotorInertia: 2e-4 },
      drive: { reduction: 50, radius: null, efficiency: 1 },
      load: { mass: null, inertia: 1.2, centreOfMass: null, levelAngle: null },
    });
    relative(responseOf(joint)?.lag, 0.136, 1e-9);
    relative(responseOf(joint)?.topSpeed, 12, 1e-9);
  });

  test.each([
    // count, reduction, inertia of the load, K per volt, T
    [1, 50, 1.2, 1, 0.136],
    [2, 50, 1.2, 1, 0.088],
    [1, 60, 1.2, 0.83333333, 0.10666667],
    [1, 40, 1.2, 1.25, 0.19],
    [1, 50, 2.4, 1, 0.232],
  ])('%i motor(s) at %i:1 on %f kg·m²: K %f, T %f', (count, reduction, inertia, k, lag) => {
    const response = responseOf(
      profileOf({
        kind: 'turn',
        unit: 'rad',
        motor: { ...plain, rotorInertia: 2e-4, count },
        drive: { reduction, radius: null, efficiency: 1 },
        load: { mass: null, inertia, centreOfMass: null, levelAngle: null },
      }),
    );
    relative(response?.topSpeed, 12 * k, 1e-7);
    relative(response?.lag, lag, 1e-7);
  });

  test('6 kg on a drum of 22 mm, 12:1, 0.85: 0.126910 N·m at the motor, of 3 N·m', () => {
    const lift = profileOf({
      motor: plain,
      drive: { reduction: 12, radius: 0.022, efficiency: 0.85 },
      load: { mass: 6, inertia: null, centreOfMass: null, levelAngle: null },
    });
    relative(responseOf(lift)?.hold, 0.12691 / 3);
  });
});

describe('units', () => {
  test.each([
    ['m', 1],
    ['cm', 100],
    ['mm', 1000],
    ['in', 1 / 0.0254],
    ['ft', 1 / 0.3048],
    ['rad', 1 / 0.05], // through the drum's radius
    ['rev', 1 / 0.05 / (2 * Math.PI)],
  ] as const)('travel read in %s', (unit, perMetre) => {
    relative(responseOf(travel({ unit }))?.topSpeed, 2.6589 * perMetre);
    relative(responseOf(travel({ unit }))?.lag, 0.0615486);
  });

  test('a roller in rpm and in rad/s: the free speed over the reduction at most', () => {
    const roller = (unit: Profile['unit']) =>
      responseOf(
        profileOf({
          kind: 'spin',
          quantity: 'speed',
          unit,
          motor: MOTOR,
          drive: { reduction: 2, radius: null, efficiency: 1 },
          load: { mass: null, inertia: 0.01, centreOfMass: null, levelAngle: null },
        }),
      )?.topSpeed;
    // Closed form: ke from (V − I_free·R)/ω_free makes V/ke a little more than the free speed: 12/(12 − 2·0.092308) of it.
    relative(roller('rpm'), (2500 * 12) / (12 - (2 * 12) / 130), 1e-9);
    relative(roller('rad/s'), ((2500 * 12) / (12 - (2 * 12) / 130)) * ((2 * Math.PI) / 60), 1e-9);
  });

  test('a joint cannot be read in metres', () => {
    expect(
      plantModelOf(profileOf({ kind: 'turn', load: { mass: null, inertia: 1, centreOfMass: null, levelAngle: null } })),
    ).toBeNull();
  });
});

describe('full output', () => {
  test('in volts is that share of the open-circuit voltage; the rest of the response scales with it', () => {
    const output = { unit: 'volts', min: -12, max: 12 } as const;
    const controller = { ...profileOf().controller, output };
    const volts = profileOf({ controller, supply: { openCircuit: 12.7, resistance: 0.02, currentLimit: 60 } });
    const fraction = profileOf({ supply: { openCircuit: 12.7, resistance: 0.02, currentLimit: 60 } });
    const duty = 12 / 12.7;
    relative(responseOf(volts)?.topSpeed, 2.6589, 1e-5);
    relative((responseOf(fraction)?.topSpeed ?? 0) * duty, 2.6589, 1e-5);
    relative((responseOf(volts)?.hold ?? 0) * duty, responseOf(fraction)?.hold ?? 0, 1e-9);
    relative(plantModelOf(volts)?.sag, (plantModelOf(fraction)?.sag ?? 0) * duty ** 2, 1e-9);
    // 60 A of 130 A at 12 V: the limit is a share of what full output would drive.
    relative(plantModelOf(volts)?.forceLimit ?? undefined, 60 / 130, 1e-9);
  });
});

describe('what is not known', () => {
  test.each(['motor', 'drive', 'load'] as const)('no %s, no plant', (part) => {
    expect(plantModelOf(profileOf({ [part]: null }))).toBeNull();
  });

  test('friction is taken as 0.05 and 1.3 times that, the supply as stiff at the motor’s voltage', () => {
    const plant = plantModelOf(profileOf({ friction: null, supply: null }));
    expect(plant?.response.drag).toBe(0.05);
    expect(plant?.response.breakaway).toBeCloseTo(0.065, 12);
    expect(plant?.sag).toBe(0);
    expect(plant?.forceLimit).toBeNull();
    expect(plant?.coupling).toBeNull();
  });

  test('a speed loop has no stops', () => {
    expect(plantModelOf(travel({ quantity: 'speed', unit: 'm/s' }))?.stops).toEqual({ min: null, max: null });
  });

  test('backlash makes two masses', () => {
    const drive = { reduction: 10, radius: 0.05, efficiency: 0.9, backlash: 0.002, stiffness: 8e4 };
    const coupling = plantModelOf(profileOf({ drive }))?.coupling;
    expect(coupling?.backlash).toBe(0.002);
    // Closed form: √(k/m) with four fifths of 20 kg on the load's side.
    relative(coupling?.frequency, Math.sqrt(8e4 / 16), 1e-9);
  });
});
