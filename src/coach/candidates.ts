import type { Gains } from '../controller/settings.ts';
import type { Profile } from '../mechanism/profile.ts';
import type { ResponseModel } from '../plant/response-model.ts';
import { carryingGains, type LoopScales, loopScales } from './scales.ts';

/** `count` values from low to high with equal ratios between them. */
function geometric(low: number, high: number, count: number): readonly number[] {
  if (count < 2 || low >= high) return [low];
  return Array.from({ length: count }, (_, k) => low * (high / low) ** (k / (count - 1)));
}

/** Proportional gains worth trying: from a quarter of the natural size to past the limit of the dead time. */
function proportionalGrid(scales: LoopScales, tolerance: number, count: number): readonly number[] {
  const low = Math.min(scales.kpUnit / 4, scales.kpLimit / 8);
  const high = Math.max(1.6 * scales.kpLimit, 4 * scales.kpUnit);
  // Where friction alone decides, the gain that just starts it at the tolerance's edge is the one to know.
  const friction = [1.2, 2].map((reserve) => (reserve * scales.breakaway) / tolerance).filter((kp) => kp < 2 * high);
  return [...geometric(low, high, count), ...friction].filter((kp) => kp > 0);
}

/** Candidates with P alone, on top of what carries the load. */
export function proportionalCandidates(response: ResponseModel, profile: Profile, count: number): readonly Gains[] {
  const base = carryingGains(response, profile);
  return proportionalGrid(loopScales(response, profile), profile.target.tolerance, count).map((kp) => ({
    ...base,
    kp,
  }));
}

/** Candidates with P and D: a grid over kp and the derivative's lead kd/kp in multiples of the lag. */
export function derivativeCandidates(response: ResponseModel, profile: Profile, count: number): readonly Gains[] {
  const scales = loopScales(response, profile);
  const base = carryingGains(response, profile);
  const leads = profile.quantity === 'position' ? [0, 0.3, 0.6, 0.85, 1.1, 1.5, 2.1, 3] : [0, 0.15];
  const lag = scales.lag + scales.dead / 2;
  return proportionalGrid(scales, profile.target.tolerance, count).flatMap((kp) =>
    leads.map((lead) => ({ ...base, kp, kd: kp * lead * lag })),
  );
}

/**
 * The same gains with an integral added: its time in multiples of the loop's own, its zone in multiples of where the
 * loop rests without it.
 */
export function integralVariants(gains: Gains, response: ResponseModel, profile: Profile): readonly Gains[] {
  const scales = loopScales(response, profile);
  if (gains.kp <= 0) return [];
  if (profile.quantity === 'speed') {
    return [0.4, 0.7, 1, 1.6, 3].map((multiple) => ({
      ...gains,
      ki: gains.kp / (multiple * (scales.lag + scales.dead)),
    }));
  }
  const loop = Math.max(4 * scales.dead, (scales.kpUnit / gains.kp) * scales.lag, scales.lag);
  const rest = Math.max(scales.breakaway / gains.kp, profile.target.tolerance);
  return [0.7, 1.5, 3, 6, 12].flatMap((multiple) =>
    [1.5, 2.5, 5].map((width) => ({ ...gains, ki: gains.kp / (multiple * loop), zone: width * rest })),
  );
}
