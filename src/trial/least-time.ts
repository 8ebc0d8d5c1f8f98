import type { Move, Profile } from '../mechanism/profile.ts';
import type { ResponseModel } from '../plant/response-model.ts';
import { straightMove } from './course.ts';

/**
 * Least time in which full output can bring a mechanism inside the tolerance: full output, then full braking so that it
 * comes to rest at the tolerance's near edge (speed loops: full output until inside). Infinite when full output cannot move it.
 *
 * @param outputCap fraction of full output
 * Source: time-optimal control of K/(s(τs+1)) is bang-bang with one switch (closed form in each piece; the switch by bisection).
 */
export function leastTime(response: ResponseModel, profile: Profile, asked: Move, outputCap: number): number {
  const move = straightMove(asked, profile.continuous);
  const distance = Math.abs(move.to - move.from) - profile.target.tolerance;
  if (distance <= 0) return 0;
  const dead = response.delay + (profile.sensor?.delay ?? 0);
  const forward = move.to > move.from;
  const drag = forward ? response.drag : response.dragBack;
  // Weight helps one way and hinders the other; an arm's is taken at its mildest.
  const weight = profile.kind === 'lift' ? (forward ? response.hold : -response.hold) : 0;
  if (profile.quantity === 'speed') return dead + speedTime(response, move, profile.target.tolerance, outputCap - drag);
  const driving = response.topSpeed * (outputCap - drag - weight);
  const braking = response.topSpeed * (outputCap + drag + weight);
  if (driving <= 0) return Number.POSITIVE_INFINITY;
  if (braking <= 0) return Number.POSITIVE_INFINITY;
  return dead + switchedTime(response.lag, driving, braking, distance);
}

function switchedTime(lag: number, driving: number, braking: number, distance: number): number {
  const course = (t: number) => {
    const speed = -driving * Math.expm1(-t / lag);
    const gone = driving * (t + lag * Math.expm1(-t / lag));
    const stop = lag * Math.log1p(speed / braking);
    return { total: gone + lag * speed - braking * stop, time: t + stop };
  };
  let low = 0;
  let high = lag;
  while (course(high).total < distance) high *= 2;
  for (let round = 0; round < 60; round++) {
    const middle = 0.5 * (low + high);
    if (course(middle).total < distance) low = middle;
    else high = middle;
  }
  return course(high).time;
}

function speedTime(response: ResponseModel, move: Move, tolerance: number, push: number): number {
  const up = Math.abs(move.to) > Math.abs(move.from);
  const end = response.topSpeed * (up ? push : -push);
  const start = Math.abs(move.from);
  const edge = up ? Math.abs(move.to) - tolerance : Math.abs(move.to) + tolerance;
  const share = (edge - end) / (start - end);
  if (share <= 0 || share > 1) return up ? Number.POSITIVE_INFINITY : 0;
  return -response.lag * Math.log(share);
}
