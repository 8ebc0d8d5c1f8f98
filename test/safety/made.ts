import { NO_GAINS } from '../../src/controller/settings.ts';
import type { Profile } from '../../src/mechanism/profile.ts';
import type { ResponseModel } from '../../src/plant/response-model.ts';
import type { PlannedTrial } from '../../src/safety/hazards.ts';

/** A made-up mechanism of which nothing is known but what a test says. */
export function made(parts: Partial<Profile> = {}): Profile {
  return {
    format: 'holdfast/profile@1',
    name: 'made-up',
    title: 'Made-up mechanism',
    kind: 'travel',
    quantity: 'position',
    unit: 'm',
    continuous: null,
    motor: null,
    drive: null,
    load: null,
    friction: null,
    supply: null,
    sensor: null,
    limits: { min: -1, max: 4, outputCap: 1 },
    controller: {
      period: 0.02,
      output: { unit: 'fraction', min: -1, max: 1 },
      timeBase: 'seconds',
      form: 'parallel',
      derivativeOn: 'error',
      derivativeFilter: 0,
      outsideZone: 'hold',
      sumLimit: null,
      slew: null,
    },
    target: { tolerance: 0.01, overshoot: 5, settlingTime: 1, moves: [[0, 1]] },
    gains: NO_GAINS,
    hazards: ['drives'],
    notes: '',
    ...parts,
  };
}

export const load = { mass: null, inertia: null, centreOfMass: null, levelAngle: null };

export function response(parts: Partial<ResponseModel> = {}): ResponseModel {
  const even = { topSpeed: 3, lag: 0.3, drag: 0.04, dragBack: 0.04, breakaway: 0.05, breakawayBack: 0.05 };
  return { ...even, hold: 0, delay: 0, ...parts };
}

export function planned(parts: Partial<PlannedTrial> = {}): PlannedTrial {
  return { gains: { ...NO_GAINS, kp: 1 }, move: { from: 0, to: 1 }, duration: 2, outputCap: 0.4, ...parts };
}
