import { uniformFloat64 } from 'pure-rand/distribution/uniformFloat64';
import { xoroshiro128plus } from 'pure-rand/generator/xoroshiro128plus';
import type { ControllerSettings, Gains } from '../../../src/controller/settings.ts';
import type { PlantModel } from '../../../src/plant/response-model.ts';

/** One closed-loop trial of the benchmark: what a search would rehearse. */
export interface SolverCase {
  readonly plant: PlantModel;
  readonly gains: Gains;
  readonly move: { readonly from: number; readonly to: number };
}

export const SETTINGS: ControllerSettings = {
  period: 0.02,
  output: { unit: 'fraction', min: -1, max: 1 },
  timeBase: 'seconds',
  form: 'parallel',
  derivativeOn: 'error',
  derivativeFilter: 0,
  outsideZone: 'hold',
  sumLimit: null,
  slew: null,
};

/** s: 250 ticks after the first. */
export const DURATION = 5;
export const RESOLUTION = 0.0005;

/**
 * Seeded mechanisms of many sizes with gains about their pole placement (ωn 0.3 to 2 over the lag, ζ 0.5 to 1.2), integral and
 * zone: some settle at once, some swing, some hunt.
 */
export function solverCases(count: number, seed = 20): readonly SolverCase[] {
  const generator = xoroshiro128plus(seed);
  const between = (low: number, high: number) => low * (high / low) ** uniformFloat64(generator);
  return Array.from({ length: count }, () => {
    const topSpeed = between(0.5, 5);
    const lag = between(0.03, 0.3);
    const drag = between(0.01, 0.08);
    const breakaway = drag * between(1, 1.6);
    const distance = between(0.2, 2);
    const naturalFrequency = between(0.3, 2) / lag;
    const damping = between(0.5, 1.2);
    const kp = (naturalFrequency ** 2 * lag) / topSpeed;
    const kd = Math.max(0, (2 * damping * naturalFrequency * lag - 1) / topSpeed);
    const error = breakaway / kp;
    return {
      plant: {
        quantity: 'position',
        response: {
          topSpeed,
          lag,
          drag,
          dragBack: drag,
          breakaway,
          breakawayBack: breakaway,
          hold: 0,
          delay: 0,
        },
        gravity: { kind: 'none' },
        stops: { min: -10, max: 10 },
        sag: 0,
        forceLimit: null,
        coupling: null,
      },
      gains: { kp, ki: kp * between(0.1, 1), kd, zone: between(1.5, 6) * error, hold: 0, pace: 0 },
      move: { from: 0, to: distance },
    };
  });
}
