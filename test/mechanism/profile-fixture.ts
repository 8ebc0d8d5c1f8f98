import { NO_GAINS } from '../../src/controller/settings.ts';
import type { Profile } from '../../src/mechanism/profile.ts';
import type { Motor } from '../../src/plant/machine.ts';

/** The motor of the worked examples: 12 V, 5000 rpm and 2 A free, 2.4 N·m and 130 A stalled. Invented. */
export const MOTOR: Motor = {
  nominalVoltage: 12,
  freeSpeed: 5000,
  freeCurrent: 2,
  stallTorque: 2.4,
  stallCurrent: 130,
  count: 1,
};

/** A lift with every number known; tests change what they are about. */
export function profileOf(changes: Partial<Profile> = {}): Profile {
  return {
    format: 'holdfast/profile@1',
    name: 'example',
    title: 'Example',
    kind: 'lift',
    quantity: 'position',
    unit: 'm',
    continuous: null,
    motor: { ...MOTOR, count: 2 },
    drive: { reduction: 10, radius: 0.05, efficiency: 0.9 },
    load: { mass: 20, inertia: null, centreOfMass: null, levelAngle: null },
    friction: { drag: 0.03, breakaway: 0.045 },
    supply: { openCircuit: 12, resistance: 0, currentLimit: null },
    sensor: { resolution: 0.0002, noise: 0, delay: 0 },
    limits: { min: 0, max: 1.4, outputCap: 1 },
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
    target: { tolerance: 0.01, overshoot: 5, settlingTime: 1, moves: [[0.1, 0.9]] },
    gains: NO_GAINS,
    hazards: ['falls'],
    notes: '',
    ...changes,
  };
}
