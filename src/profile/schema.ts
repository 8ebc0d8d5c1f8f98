import { z } from 'zod';
import { HAZARDS, KINDS, POSITION_UNITS, SPEED_UNITS } from '../mechanism/profile.ts';

/** holdfast/profile@1, field by field; contracts, section 1. Rules that span fields are in `consistency.ts`. */

const above0 = z.number().positive();
const atLeast0 = z.number().nonnegative();
const share = z.number().min(0).max(1);

const motor = z.looseObject({
  nominalVoltage: above0.max(1000),
  freeSpeed: above0.max(1e6),
  freeCurrent: atLeast0,
  stallTorque: above0,
  stallCurrent: above0,
  count: z.number().int().min(1).max(64),
  rotorInertia: atLeast0.nullable().optional(),
});

const drive = z.looseObject({
  reduction: above0.max(1e6),
  radius: above0.max(100).nullable(),
  efficiency: z.number().gt(0).max(1),
  backlash: atLeast0.nullable().optional(),
  stiffness: above0.nullable().optional(),
});

const load = z.looseObject({
  mass: above0.nullable(),
  inertia: above0.nullable(),
  centreOfMass: atLeast0.nullable(),
  levelAngle: z.number().nullable(),
});

const controller = z.looseObject({
  period: above0.max(10),
  output: z.looseObject({ unit: z.enum(['fraction', 'percent', 'volts']), min: z.number(), max: z.number() }),
  timeBase: z.enum(['seconds', 'ticks']),
  form: z.enum(['parallel', 'standard', 'series']),
  derivativeOn: z.enum(['error', 'measured']),
  derivativeFilter: atLeast0.max(10),
  outsideZone: z.enum(['hold', 'reset']),
  sumLimit: above0.nullable(),
  slew: above0.nullable(),
});

const gains = z.looseObject({
  kp: atLeast0,
  ki: atLeast0,
  kd: atLeast0,
  zone: above0.nullable(),
  hold: z.number(),
  pace: atLeast0,
});

export const profileSchema = z.looseObject({
  format: z.literal('holdfast/profile@1'),
  name: z.string().regex(/^[a-z0-9-]{1,40}$/),
  title: z.string().max(200),
  kind: z.enum(KINDS),
  quantity: z.enum(['position', 'speed']),
  unit: z.enum([...POSITION_UNITS, ...SPEED_UNITS]),
  continuous: above0.nullable(),
  motor: motor.nullable(),
  drive: drive.nullable(),
  load: load.nullable(),
  friction: z.looseObject({ drag: share.nullable(), breakaway: share.nullable() }).nullable(),
  supply: z
    .looseObject({ openCircuit: above0.max(1000), resistance: atLeast0.max(100), currentLimit: above0.nullable() })
    .nullable(),
  sensor: z.looseObject({ resolution: atLeast0, noise: atLeast0, delay: atLeast0.max(10) }).nullable(),
  limits: z.looseObject({ min: z.number().nullable(), max: z.number().nullable(), outputCap: z.number().gt(0).max(1) }),
  controller,
  target: z.looseObject({
    tolerance: above0,
    overshoot: atLeast0.max(100),
    settlingTime: above0.max(600),
    moves: z.array(z.tuple([z.number(), z.number()])).max(50),
  }),
  gains,
  hazards: z.array(z.enum(HAZARDS)),
  notes: z.string().max(10_000),
});
