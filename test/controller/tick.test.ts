import { describe, expect, test } from 'vitest';
import { rebuildOutput } from '../../src/controller/rebuild.ts';
import { type ControllerSettings, type Gains, NO_GAINS } from '../../src/controller/settings.ts';
import { createController, type HoldShape, type Loop, tick } from '../../src/controller/tick.ts';

const SETTINGS: ControllerSettings = {
  period: 0.02,
  output: { unit: 'fraction', min: -100, max: 100 },
  timeBase: 'seconds',
  form: 'parallel',
  derivativeOn: 'error',
  derivativeFilter: 0,
  outsideZone: 'hold',
  sumLimit: null,
  slew: null,
};

function loopOf(gains: Partial<Gains>, settings: Partial<ControllerSettings> = {}, rest: Partial<Loop> = {}): Loop {
  return {
    settings: { ...SETTINGS, ...settings },
    gains: { ...NO_GAINS, ...gains },
    quantity: 'position',
    continuous: null,
    holdShape: { kind: 'none' },
    outputCap: 1,
    ...rest,
  };
}

/** Outputs of a controller over rows of [time, setpoint, measured]. */
function outputs(loop: Loop, rows: readonly (readonly [number, number, number])[], setpointSpeed = 0): number[] {
  const controller = createController(loop);
  return rows.map(([time, setpoint, measured]) => tick(controller, time, setpoint, measured, setpointSpeed));
}

describe('the integral', () => {
  test('sums the error of each tick over the time since the last: backward rectangles', () => {
    // Closed form: the sum of e = t on [0, 1] in steps of 0.1 by backward rectangles is 0.55 (trapezoids 0.50, forward 0.45).
    const rows = Array.from({ length: 11 }, (_, k) => [0.1 * k, 0.1 * k, 0] as const);
    expect(outputs(loopOf({ ki: 1 }), rows).at(-1)).toBeCloseTo(0.55, 12);
    // Closed form: e^(−t/0.5) likewise, 0.3905393.
    const decay = Array.from({ length: 11 }, (_, k) => [0.1 * k, Math.exp(-0.2 * k), 0] as const);
    expect(outputs(loopOf({ ki: 1 }), decay).at(-1)).toBeCloseTo(0.3905393, 7);
  });

  test('starts at nil whatever the first error and time', () => {
    expect(outputs(loopOf({ ki: 10 }), [[5, 1, 0]])[0]).toBe(0);
  });

  test('stands still outside the zone, or is put back to nil there', () => {
    const rows = [
      [0, 0.4, 0],
      [1, 0.4, 0],
      [2, 2, 0],
      [3, 0.4, 0],
    ] as const;
    expect(outputs(loopOf({ ki: 1, zone: 0.5 }), rows)).toEqual([0, 0.4, 0.4, 0.8]);
    expect(outputs(loopOf({ ki: 1, zone: 0.5 }, { outsideZone: 'reset' }), rows)).toEqual([0, 0.4, 0, 0.4]);
  });

  test('does not act when the error is the zone itself', () => {
    expect(
      outputs(loopOf({ ki: 1, zone: 0.5 }), [
        [0, 0.5, 0],
        [1, 0.5, 0],
      ]),
    ).toEqual([0, 0]);
  });

  test('is limited in output units, and leaves the limit at once when the error turns', () => {
    const rows = [
      [0, 1, 0],
      [1, 1, 0],
      [2, 1, 0],
      [3, -1, 0],
    ] as const;
    const seen = outputs(loopOf({ ki: 2 }, { sumLimit: 3 }), rows);
    expect(seen).toEqual([0, 2, 3, 1]);
  });
});

describe('the derivative', () => {
  test('kicks for one tick when it is on the error, and not when it is on the reading', () => {
    // Closed form: kd·Δr/dt = 0.1·1/0.02 = 5.
    const rows = [
      [0, 0, 0],
      [0.02, 1, 0],
      [0.04, 1, 0],
    ] as const;
    expect(outputs(loopOf({ kd: 0.1 }), rows)[1]).toBeCloseTo(5, 12);
    expect(outputs(loopOf({ kd: 0.1 }), rows)[2]).toBe(0);
    expect(outputs(loopOf({ kd: 0.1 }, { derivativeOn: 'measured' }), rows)).toEqual([0, 0, 0]);
  });

  test('of one count of the sensor is kd·q/dt', () => {
    // Closed form: 0.1·0.001/0.02 = 0.005, against the motion on both.
    const rows = [
      [0, 0, 0],
      [0.02, 0, 0.001],
    ] as const;
    for (const derivativeOn of ['error', 'measured'] as const) {
      expect(outputs(loopOf({ kd: 0.1 }, { derivativeOn }), rows)[1]).toBeCloseTo(-0.005, 12);
    }
  });

  test('is filtered by a backward Euler step: h/(τ + h) of the way at each tick', () => {
    // Closed form: 0.02/(0.1 + 0.02) = 0.166667; with τ = h it is one half.
    const rows = [
      [0, 0, 0],
      [0.02, 0.02, 0],
      [0.04, 0.04, 0],
    ] as const;
    const slow = outputs(loopOf({ kd: 1 }, { derivativeFilter: 0.1 }), rows);
    expect(slow[1]).toBeCloseTo(1 / 6, 12);
    expect(slow[2]).toBeCloseTo(1 / 6 + (5 / 6) * (1 / 6), 12);
    expect(outputs(loopOf({ kd: 1 }, { derivativeFilter: 0.02 }), rows)[1]).toBeCloseTo(0.5, 12);
  });

  test('keeps its value over a row whose time stands still', () => {
    const rows = [
      [0, 0, 0],
      [0.02, 0.02, 0],
      [0.02, 0.5, 0],
    ] as const;
    expect(outputs(loopOf({ kd: 1 }), rows)[2]).toBeCloseTo(1, 12);
  });
});

describe('a quantity that wraps', () => {
  test('is brought on by the short way', () => {
    const seen = outputs(loopOf({ kp: 1 }, {}, { continuous: 360 }), [
      [0, 350, 10],
      [1, -170, 170],
      [2, 730, 0],
    ]);
    expect(seen[0]).toBeCloseTo(-20, 12);
    expect(seen[1]).toBeCloseTo(20, 12);
    expect(seen[2]).toBeCloseTo(10, 12);
  });

  test('keeps its way at exactly half a turn', () => {
    const loop = loopOf({ kp: 1 }, { output: { unit: 'fraction', min: -400, max: 400 } }, { continuous: 360 });
    expect(
      outputs(loop, [
        [0, 180, 0],
        [1, -180, 0],
      ]),
    ).toEqual([180, -180]);
  });
});

describe('what is added', () => {
  test('a hold term: the same everywhere for a lift, with the cosine for an arm', () => {
    const arm: HoldShape = { kind: 'cosine', level: 10, radiansPerUnit: Math.PI / 180 };
    expect(outputs(loopOf({ hold: 0.2 }, {}, { holdShape: { kind: 'constant' } }), [[0, 0, 5]])).toEqual([0.2]);
    const seen = outputs(loopOf({ hold: 0.2 }, {}, { holdShape: arm }), [
      [0, 0, 10],
      [1, 0, 70],
      [2, 0, 100],
    ]);
    // Closed form: cos 0°, cos 60°, cos 90° from level.
    [0.2, 0.1, 0].forEach((expected, k) => {
      expect(seen[k]).toBeCloseTo(expected, 12);
    });
  });

  test('pace: on the setpoint’s speed in a position loop, on the setpoint in a speed loop', () => {
    expect(outputs(loopOf({ pace: 0.5 }), [[0, 3, 0]], 1.2)[0]).toBeCloseTo(0.6, 12);
    expect(outputs(loopOf({ pace: 0.5 }, {}, { quantity: 'speed' }), [[0, 3, 0]], 1.2)[0]).toBeCloseTo(1.5, 12);
  });
});

describe('what is sent', () => {
  test('is limited by the controller’s range and by the cap, whichever is closer', () => {
    const settings = { output: { unit: 'volts', min: -6, max: 12 } } as const;
    const rows = [
      [0, 1, 0],
      [1, -1, 0],
    ] as const;
    expect(outputs(loopOf({ kp: 100 }, settings), rows)).toEqual([12, -6]);
    expect(outputs(loopOf({ kp: 100 }, settings, { outputCap: 0.25 }), rows)).toEqual([3, -3]);
  });

  test('changes no faster than the slew limit, from nil over one period at the first tick', () => {
    const rows = [
      [0, 1, 0],
      [0.02, 1, 0],
      [0.05, 1, 0],
      [0.06, -1, 0],
    ] as const;
    const seen = outputs(loopOf({ kp: 50 }, { slew: 100 }), rows);
    [2, 4, 7, 6].forEach((expected, k) => {
      expect(seen[k]).toBeCloseTo(expected, 12);
    });
  });
});

test('a rebuilt output is what was sent, with its parts, from the log’s columns and the gains', () => {
  const loop = loopOf({ kp: 3, ki: 2, kd: 0.1, hold: 0.05 }, {}, { holdShape: { kind: 'constant' } });
  const time = Float64Array.from([0, 0.02, 0.05, 0.06]);
  const setpoint = Float64Array.from([1, 1, 1, 1]);
  const measured = Float64Array.from([0, 0.1, 0.3, 0.35]);
  const { output, parts } = rebuildOutput(loop, time, setpoint, measured);
  // By hand: e = 1, 0.9, 0.7, 0.65; S = 0, 0.018, 0.039, 0.0455; d = 0, −5, −6.667, −5.
  expect([...parts.p]).toEqual([3, 2.7, 2.0999999999999996, 1.9500000000000002]);
  [0, 0.036, 0.078, 0.091].forEach((part, row) => {
    expect(parts.i[row]).toBeCloseTo(part, 12);
  });
  [0, -0.5, -2 / 3, -0.5].forEach((part, row) => {
    expect(parts.d[row]).toBeCloseTo(part, 12);
  });
  output.forEach((sent, row) => {
    expect(sent).toBeCloseTo((parts.p[row] ?? 0) + (parts.i[row] ?? 0) + (parts.d[row] ?? 0) + 0.05, 12);
  });
});
