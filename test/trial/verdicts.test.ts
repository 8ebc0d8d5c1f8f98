import { describe, expect, test } from 'vitest';
import type { Gains } from '../../src/controller/settings.ts';
import { responseOf } from '../../src/mechanism/plant-of.ts';
import type { Move, Profile } from '../../src/mechanism/profile.ts';
import type { PlantModel, ResponseModel } from '../../src/plant/response-model.ts';
import type { Samples } from '../../src/record/samples.ts';
import { leastTime } from '../../src/trial/least-time.ts';
import { type ReadingContext, readTrial } from '../../src/trial/reading.ts';
import { simulatedMechanismOf, simulateTrial } from '../../src/trial/simulate.ts';
import type { VerdictName } from '../../src/trial/verdict.ts';
import { samplesOf } from '../fixtures/second-order.ts';
import { starter } from '../fixtures/starters.ts';

interface Setup {
  readonly profile: Profile;
  readonly gains: Partial<Gains>;
  readonly move: Move;
  readonly duration?: number;
  readonly outputCap?: number;
  /** What the machine really is, where it differs from the nameplate. */
  readonly really?: Partial<ResponseModel>;
  readonly plant?: Partial<PlantModel>;
  readonly spoil?: (samples: Samples) => Samples;
  readonly context?: Partial<ReadingContext>;
}

const NONE: Gains = { kp: 0, ki: 0, kd: 0, zone: null, hold: 0, pace: 0 };

function read(setup: Setup) {
  const { profile, move } = setup;
  const mechanism = simulatedMechanismOf(profile);
  const nameplate = responseOf(profile);
  if (!mechanism || !nameplate) throw new Error('this starter is known');
  const response = { ...mechanism.plant.response, ...setup.really };
  const gains = { ...NONE, hold: profile.kind === 'lift' ? nameplate.hold : 0, ...setup.gains };
  const outputCap = setup.outputCap ?? profile.limits.outputCap;
  const plain = simulateTrial(
    { ...mechanism, plant: { ...mechanism.plant, ...setup.plant, response } },
    {
      controller: profile.controller,
      gains,
      move,
      duration: setup.duration ?? 3,
      outputCap,
      continuous: profile.continuous,
      shape: null,
    },
    11,
  );
  return readTrial(setup.spoil ? setup.spoil(plain) : plain, {
    profile,
    gains,
    move,
    outputCap,
    response: null,
    reach: null,
    nameplate,
    promise: null,
    ...setup.context,
  });
}

const names = (setup: Setup): readonly VerdictName[] => read(setup).verdicts.map((verdict) => verdict.is);

const drivetrain = starter('drivetrain');
const turret = starter('turret');
const lift = starter('lift');
const roller = starter('roller');
const turn = { from: 0, to: 90 };
const drive = { from: 0, to: 2 };
const scaled = (factor: number) => (samples: Samples) => ({
  ...samples,
  measured: samples.measured.map((value) => value * factor),
});

describe('each verdict fires on what it is for', () => {
  const cases: readonly (readonly [VerdictName, Setup])[] = [
    ['settled', { profile: turret, gains: { kp: 0.0286, kd: 0.0024 }, move: turn }],
    ['slow', { profile: drivetrain, gains: { kp: 0.35 }, move: drive, duration: 2.2 }],
    ['stuck-short', { profile: turret, gains: { kp: 0.003 }, move: turn, duration: 4 }],
    ['overshoots', { profile: turret, gains: { kp: 0.012 }, move: turn }],
    ['swings', { profile: turret, gains: { kp: 0.03 }, move: turn }],
    ['growing-swing', { profile: turret, gains: { kp: 0.6 }, move: turn, really: { delay: 0.06 } }],
    ['chatters', { profile: turret, gains: { kp: 0.03, kd: 0.03 }, move: turn }],
    ['wound-up', { profile: drivetrain, gains: { kp: 0.6, ki: 1.5 }, move: drive, duration: 4 }],
    ['saturated', { profile: drivetrain, gains: { kp: 5, kd: 0.6 }, move: drive }],
    [
      'reversed',
      {
        profile: turret,
        gains: { kp: 0.01 },
        move: turn,
        spoil: (samples) => ({ ...samples, measured: samples.measured.map((value) => -value) }),
      },
    ],
    ['deaf', { profile: turret, gains: { kp: 0.01 }, move: turn, spoil: scaled(0) }],
    [
      'frozen',
      {
        profile: turret,
        gains: { kp: 0.03 },
        move: turn,
        spoil: (samples) => ({
          ...samples,
          measured: samples.measured.map((value, row) => (row < 10 ? value : (samples.measured[9] ?? 0))),
          output: new Float64Array(samples.time.length).fill(0.8),
        }),
      },
    ],
    [
      'jumps',
      {
        profile: drivetrain,
        gains: { kp: 1 },
        move: drive,
        spoil: (samples) => ({
          ...samples,
          measured: samples.measured.map((value, row) => (row > 30 ? value - 0.9 : value)),
        }),
      },
    ],
    ['wrong-scale', { profile: drivetrain, gains: { kp: 0.3 }, move: drive, spoil: scaled(39.37) }],
    // A sensor in radians where degrees are meant: to the loop the machine is 57.3 times slower.
    ['wrong-scale', { profile: turret, gains: { kp: 0.02 }, move: turn, really: { topSpeed: 1116 / 57.2958 } }],
    [
      'hit-a-stop',
      {
        profile: { ...lift, limits: { ...lift.limits, max: 1.05 } },
        gains: { kp: 60, kd: 0 },
        move: { from: 0.2, to: 1 },
        really: { delay: 0.05 },
        plant: { stops: { min: 0, max: 1.05 } },
      },
    ],
    [
      'sagging',
      {
        profile: drivetrain,
        gains: { kp: 1 },
        move: drive,
        spoil: (samples) => ({ ...samples, supply: samples.time.map((t) => (t > 0.1 && t < 0.4 ? 8.6 : 12.4)) }),
      },
    ],
    [
      'uneven-ticks',
      {
        profile: drivetrain,
        gains: { kp: 1 },
        move: drive,
        spoil: (samples) => ({ ...samples, time: samples.time.map((t, row) => t + (row % 7 === 0 ? 0.013 : 0)) }),
      },
    ],
    [
      'late',
      {
        profile: turret,
        gains: { kp: 0.01 },
        move: turn,
        context: { response: { ...(responseOf(turret) as ResponseModel), delay: 0.2 } },
      },
    ],
    [
      'one-sided',
      {
        profile: lift,
        gains: { kp: 8 },
        move: { from: 0.2, to: 1 },
        context: { response: { ...(responseOf(lift) as ResponseModel), drag: 0.1, dragBack: 0.25 } },
      },
    ],
    [
      'out-of-band',
      {
        profile: turret,
        gains: { kp: 0.01 },
        move: turn,
        context: { promise: { inside: false, share: 0.4, first: 20 } },
      },
    ],
    [
      'out-of-reach',
      {
        profile: { ...turret, target: { ...turret.target, settlingTime: 0.12 } },
        gains: { kp: 0.02, kd: 0.002 },
        move: turn,
        context: { reach: responseOf(turret) as ResponseModel },
      },
    ],
  ];
  test.each(cases)('%s', (name, setup) => {
    expect(names(setup)).toContain(name);
  });

  test('steady-swing: a swing that neither grows nor dies', () => {
    const time = Float64Array.from({ length: 200 }, (_, k) => k * 0.02);
    const measured = time.map((t) => (t < 0.3 ? t / 0.3 : 1 + 0.08 * Math.sin((t - 0.3) * 12)));
    const output = time.map((t) => 0.2 * Math.cos(t * 12));
    const profile = { ...drivetrain, limits: { ...drivetrain.limits, min: null, max: null } };
    const reading = readTrial(samplesOf({ time, measured, output, setpoint: 1 }), {
      profile,
      gains: { ...NONE, kp: 1 },
      move: { from: 0, to: 1 },
      outputCap: 1,
      response: null,
      reach: null,
      nameplate: null,
      promise: null,
    });
    expect(reading.verdicts.map((verdict) => verdict.is)).toContain('steady-swing');
    expect(reading.meets).toBe(false);
  });

  test('hunting: rests on alternate sides with a slip between, under an integral', () => {
    // Integral action with static friction above Coulomb hunts: Olsson & Åström, IEEE TCST 9 (2001) 629 (behaviour, not period).
    const stiff = { ...turret, target: { ...turret.target, tolerance: 0.5 } };
    const found = names({
      profile: stiff,
      gains: { kp: 0.006, ki: 0.01, kd: 0.0008 },
      move: turn,
      duration: 25,
      really: { drag: 0.05, dragBack: 0.05, breakaway: 0.14, breakawayBack: 0.14 },
    });
    expect(found).toContain('hunting');
  });

  test('loose: it rocks within its lost motion', () => {
    const wrist = starter('wrist');
    const time = Float64Array.from({ length: 300 }, (_, k) => k * 0.01);
    const measured = time.map((t) => (t < 0.3 ? -45 + 300 * t : 45 + 0.3 * Math.sin(t * 30)));
    const output = time.map((t) => (t < 0.3 ? 60 : 12 * Math.sign(Math.cos(t * 30))));
    const reading = readTrial(samplesOf({ time, measured, output, setpoint: 45 }), {
      profile: wrist,
      gains: { ...NONE, kp: 3 },
      move: { from: -45, to: 45 },
      outputCap: 0.6,
      response: null,
      reach: null,
      nameplate: null,
      promise: null,
    });
    expect(reading.verdicts.map((verdict) => verdict.is)).toContain('loose');
  });
});

describe('no false alarm', () => {
  const grave: readonly VerdictName[] = [
    'reversed',
    'deaf',
    'frozen',
    'jumps',
    'wrong-scale',
    'hit-a-stop',
    'out-of-reach',
    'growing-swing',
    'hunting',
    'loose',
    'uneven-ticks',
    'sagging',
  ];

  test('on healthy trials over gains, sizes and nameplates wrong by a third', () => {
    const wrong: string[] = [];
    let count = 0;
    for (const profile of [drivetrain, turret, lift, roller]) {
      const [from, to] = profile.target.moves[0] ?? [0, 0];
      const response = responseOf(profile) as ResponseModel;
      const unit =
        profile.quantity === 'speed' ? 1 / response.topSpeed : 1 / (4 * response.topSpeed * (response.lag + 0.04));
      for (const share of [0.5, 1, 2]) {
        for (const off of [0.7, 1, 1.4]) {
          count++;
          const setup: Setup = {
            profile,
            gains: { kp: unit * share, pace: profile.quantity === 'speed' ? 1 / response.topSpeed : 0 },
            move: { from, to },
            really: { topSpeed: response.topSpeed * off, lag: response.lag / off },
          };
          for (const name of names(setup))
            if (grave.includes(name)) wrong.push(`${profile.name} ${share} ${off}: ${name}`);
        }
      }
    }
    expect(count).toBeGreaterThanOrEqual(30);
    expect(wrong).toEqual([]);
  });

  test('an output under the breakaway is stuck short, not deaf', () => {
    const found = names({ profile: turret, gains: { kp: 0.0006 }, move: turn });
    expect(found).toContain('stuck-short');
    expect(found).not.toContain('deaf');
  });
});

describe('words', () => {
  test('a verdict speaks in the machine’s own numbers', () => {
    const verdict = read({ profile: turret, gains: { kp: 0.003 }, move: turn, duration: 4 }).verdicts.find(
      ({ is }) => is === 'stuck-short',
    );
    expect(verdict?.because).toMatch(
      /^Rests [\d.]+ deg short: 0\.0\d+ output at rest is under the 0\.07 that this mechanism needs to start moving\.$/,
    );
    expect(verdict?.rule).not.toBe('');
    expect(Object.keys(verdict?.numbers ?? {})).toContain('restingError');
  });
});

describe('least time of a move', () => {
  test('is that of a simulated bang-bang course', () => {
    // Closed form: time-optimal control of K/(s(τs+1)) has one switch. Checked against the double integrator it tends to for a
    // large lag: 2·sqrt(distance/acceleration), acceleration = K/τ.
    const response = {
      topSpeed: 1000,
      lag: 1000,
      drag: 0,
      dragBack: 0,
      breakaway: 0,
      breakawayBack: 0,
      hold: 0,
      delay: 0,
    };
    const profile = { ...drivetrain, sensor: null, target: { ...drivetrain.target, tolerance: 1e-9 } };
    expect(leastTime(response, profile, { from: 0, to: 1 }, 1)).toBeCloseTo(2, 2);
    expect(leastTime({ ...response, delay: 0.1 }, profile, { from: 0, to: 1 }, 1)).toBeCloseTo(2.1, 2);
    expect(leastTime({ ...response, drag: 1.2 }, profile, { from: 0, to: 1 }, 1)).toBe(Number.POSITIVE_INFINITY);
  });
});
