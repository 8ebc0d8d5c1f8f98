import { uniformFloat64 } from 'pure-rand/distribution/uniformFloat64';
import { xoroshiro128plus } from 'pure-rand/generator/xoroshiro128plus';
import type { PlantModel } from '../../src/plant/response-model.ts';

/** Draws for tests: the same for the same seed. */
export interface Draws {
  /** Even between the two. */
  readonly even: (low: number, high: number) => number;
  /** Even in the logarithm. */
  readonly log: (low: number, high: number) => number;
  readonly chance: (share: number) => boolean;
}

export function drawsOf(seed: number): Draws {
  const generator = xoroshiro128plus(seed);
  const unit = () => uniformFloat64(generator);
  return {
    even: (low, high) => low + (high - low) * unit(),
    log: (low, high) => low * (high / low) ** unit(),
    chance: (share) => unit() < share,
  };
}

/** A seeded mechanism of any size with any of the features that the exact solver knows. */
export function randomPlant(draws: Draws, gravity: 'none' | 'constant' | 'cosine'): PlantModel {
  const drag = draws.chance(0.1) ? 0 : draws.log(0.005, 0.15);
  const dragBack = draws.chance(0.5) ? drag : draws.log(0.005, 0.15);
  const topSpeed = draws.log(0.2, 50);
  return {
    quantity: draws.chance(0.7) ? 'position' : 'speed',
    response: {
      topSpeed,
      lag: draws.log(0.004, 1),
      drag,
      dragBack,
      breakaway: draws.chance(0.3) ? drag : drag * draws.even(1, 2),
      breakawayBack: draws.chance(0.3) ? dragBack : dragBack * draws.even(1, 2),
      hold: gravity === 'none' ? 0 : draws.even(-0.1, 0.4),
      delay: 0,
    },
    gravity:
      gravity === 'cosine'
        ? { kind: 'cosine', level: draws.even(-1, 1), radiansPerUnit: draws.log(0.3, 3) / topSpeed }
        : { kind: gravity },
    stops: {
      min: draws.chance(0.4) ? -topSpeed * draws.log(0.02, 0.5) : null,
      max: draws.chance(0.4) ? topSpeed * draws.log(0.02, 0.5) : null,
    },
    sag: draws.chance(0.5) ? draws.log(0.01, 0.6) : 0,
    forceLimit: draws.chance(0.4) ? draws.log(0.2, 1) : null,
    coupling: null,
  };
}
