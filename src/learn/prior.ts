import { responseOf } from '../mechanism/plant-of.ts';
import type { Profile } from '../mechanism/profile.ts';
import type { ResponseModel } from '../plant/response-model.ts';
import { normalNumbers } from '../trial/chance.ts';
import { straightMove } from '../trial/course.ts';
import type { Prior } from './learnt.ts';
import { coordinatesOf, decode, PARAMETERS } from './parameters.ts';

/** σ in ln of what a name plate says of top speed and lag; design's model, section 5. */
const NAMEPLATE_SIGMA = 0.35;

/**
 * What is believed of a mechanism before any log: its nameplate, or, where the machine is unknown, sizes taken from the
 * target (a mechanism that is asked to make this move in that time can do so), with wide deviations.
 */
export function priorOf(profile: Profile): Prior {
  const nameplate = responseOf(profile);
  const { period } = profile.controller;
  const carries = profile.kind === 'lift' || profile.kind === 'arm';
  const delay = 0.3 * period;
  if (nameplate !== null) {
    const knowsDrag = profile.friction?.drag != null;
    return {
      response: { ...nameplate, delay: Math.max(nameplate.delay, delay) },
      sigma: {
        topSpeed: NAMEPLATE_SIGMA,
        lag: NAMEPLATE_SIGMA,
        drag: knowsDrag ? 0.5 : 0.9,
        breakaway: 0.8,
        hold: carries ? 0.02 + 0.35 * Math.abs(nameplate.hold) : 0,
        delay: 1.5 * period,
      },
    };
  }
  return {
    response: { ...unknownResponse(profile), delay },
    sigma: { topSpeed: 1.6, lag: 1.2, drag: 1.1, breakaway: 0.9, hold: carries ? 0.25 : 0, delay: 2.5 * period },
  };
}

function unknownResponse(profile: Profile): Omit<ResponseModel, 'delay'> {
  const moves = profile.target.moves;
  const travelled = (from: number, to: number) => {
    const straight = straightMove({ from, to }, profile.continuous);
    return Math.abs(straight.to - straight.from);
  };
  const reach = Math.max(
    1e-9,
    ...moves.map(([from, to]) =>
      profile.quantity === 'speed' ? Math.max(Math.abs(from), Math.abs(to)) : travelled(from, to),
    ),
  );
  const topSpeed = profile.quantity === 'speed' ? 1.6 * reach : (2.5 * reach) / profile.target.settlingTime;
  const lag = Math.min(0.3, Math.max(0.03, 0.15 * profile.target.settlingTime));
  return { topSpeed, lag, drag: 0.05, dragBack: 0.05, breakaway: 0.065, breakawayBack: 0.065, hold: 0 };
}

/** Seeded draws from a prior, physically valid. */
export function drawPrior(prior: Prior, count: number, seed: number): readonly ResponseModel[] {
  const { centre, deviations, delayBend } = coordinatesOf(prior);
  const chance = normalNumbers(seed, count * PARAMETERS.length);
  return Array.from({ length: count }, (_, draw) =>
    decode(
      centre.map((value, j) => value + (deviations[j] ?? 0) * (chance[draw * PARAMETERS.length + j] ?? 0)),
      delayBend,
    ),
  );
}
