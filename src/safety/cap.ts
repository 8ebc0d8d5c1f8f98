import type { Profile } from '../mechanism/profile.ts';
import type { ResponseModel } from '../plant/response-model.ts';

/** Most output of a first powered trial, fraction of full; design's safety, Gate. */
const FIRST_CAP = 0.4;

/** Reserve over the weight of what must hold itself up. */
const OVER_HOLD = 0.25;

/**
 * Output cap of the first trial of a run: the smallest that still moves it well, never above 40 % unless the mechanism must
 * hold itself up, and then its hold and a quarter.
 *
 * @param response  the best that is known before any trial
 * @returns fraction of full output, no more than the profile's cap
 */
export function firstCap(profile: Profile, response: ResponseModel): number {
  const breakaway = Math.max(response.breakaway, response.breakawayBack);
  const hold = profile.kind === 'lift' || profile.kind === 'arm' ? Math.abs(response.hold) : 0;
  // Twice what starts it, and a tenth to gather speed by: enough to see how it accelerates.
  const moves = Math.max(0.2, 2 * breakaway + 0.1);
  const most = hold > 0 ? Math.max(FIRST_CAP, hold + OVER_HOLD) : FIRST_CAP;
  return Math.min(profile.limits.outputCap, most, hold + moves);
}

/**
 * Output cap of the next trial: all that the profile allows after a trial that kept to the band it was promised; as it was
 * after one that left it, or that was promised none.
 */
export function nextCap(profile: Profile, lastCap: number, inBand: boolean | null): number {
  return inBand === true ? profile.limits.outputCap : Math.min(lastCap, profile.limits.outputCap);
}
