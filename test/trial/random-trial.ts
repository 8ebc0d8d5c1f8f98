import type { SimulatedMechanism, TrialRequest } from '../../src/trial/trial.ts';
import { type Draws, randomPlant } from '../plant/random-plant.ts';

/** A seeded mechanism and a trial on it that moves, swings, hunts or hits a stop; with every option of the controller now and then. */
export function randomTrial(
  draws: Draws,
  gravity: 'none' | 'constant' | 'cosine',
): { mechanism: SimulatedMechanism; request: TrialRequest } {
  const drawn = randomPlant(draws, gravity);
  const { topSpeed, lag } = drawn.response;
  const period = draws.log(0.005, 0.03);
  const isSpeed = drawn.quantity === 'speed';
  const plant = {
    ...drawn,
    response: { ...drawn.response, delay: draws.chance(0.5) ? draws.even(0, 2.5) * period : 0 },
  };
  const full = draws.chance(0.5) ? 1 : draws.chance(0.5) ? 12 : 100;
  const stiffness = draws.log(0.3, 3);
  const kp = ((isSpeed ? stiffness : stiffness ** 2 / lag / 3) * full) / topSpeed;
  const distance = isSpeed ? topSpeed * draws.even(0.1, 0.9) : topSpeed * draws.log(0.02, 0.6);
  return {
    mechanism: {
      plant,
      reading: {
        resolution: 0,
        noise: 0,
        delay: draws.chance(0.4) ? draws.even(0, 1.7) * period : 0,
        period: 0,
        jitter: draws.chance(0.3) ? draws.even(0, 0.3) : 0,
      },
    },
    request: {
      controller: {
        period,
        output: { unit: full === 1 ? 'fraction' : full === 12 ? 'volts' : 'percent', min: -full, max: full },
        timeBase: 'seconds',
        form: 'parallel',
        derivativeOn: draws.chance(0.5) ? 'error' : 'measured',
        derivativeFilter: draws.chance(0.3) ? draws.log(0.005, 0.1) : 0,
        outsideZone: draws.chance(0.5) ? 'hold' : 'reset',
        sumLimit: draws.chance(0.3) ? draws.log(0.02, 0.5) * full : null,
        slew: draws.chance(0.2) ? draws.log(2, 50) * full : null,
      },
      gains: {
        kp,
        ki: draws.chance(0.7) ? kp * draws.log(0.1, 5) : 0,
        kd: draws.chance(0.6) ? kp * lag * draws.log(0.05, 0.7) : 0,
        zone: draws.chance(0.5) ? distance * draws.log(0.05, 0.8) : null,
        hold: gravity === 'constant' && draws.chance(0.5) ? plant.response.hold * full : 0,
        pace: isSpeed && draws.chance(0.5) ? full / topSpeed : 0,
      },
      move: { from: 0, to: draws.chance(0.5) ? distance : -distance },
      duration: 60 * period,
      outputCap: draws.chance(0.3) ? draws.even(0.3, 1) : 1,
      continuous: !isSpeed && draws.chance(0.2) ? distance * draws.even(0.8, 3) : null,
      shape: null,
    },
  };
}
