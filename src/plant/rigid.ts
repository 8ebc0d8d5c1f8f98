import { lagShare, meanLagShare, timeToLevel } from './lag.ts';
import { findPiece, newPiece, type Piece, type RigidLaw, startDirection } from './rigid-law.ts';
import { findRoot } from './root.ts';

/** A rigid mechanism in motion: changed in place by {@link advanceRigid} and {@link strideRigid}. */
export interface RigidMotion {
  readonly law: RigidLaw;
  position: number;
  speed: number;
  /** Where the solver keeps the piece that it is in. */
  readonly piece: Piece;
}

/** Puts a rigid mechanism at its start. */
export function startRigid(law: RigidLaw, position: number, speed: number): RigidMotion {
  return { law, position, speed, piece: newPiece() };
}

// Four pieces, zero speed, a stop and a start from rest: no held output has more events than this.
const MOST_EVENTS = 16;

/**
 * Moves a rigid mechanism under a held output, exactly: from event to event (edge of a piece of the motor's law, zero
 * speed, stuck or set off, stop hit), each in closed form but a stop's time, which is a root found to rounding. A stop
 * takes all speed away.
 *
 * @param u output, fraction of full output
 * @param duration s, ≥ 0
 */
export function advanceRigid(motion: RigidMotion, u: number, duration: number): void {
  const { law } = motion;
  let left = duration;
  for (let events = 0; left > 0 && events < MOST_EVENTS; events++) {
    const direction = motion.speed === 0 ? startDirection(law, u, motion.position, 0) : Math.sign(motion.speed);
    if (direction === 0) return;
    const stop = direction > 0 ? law.max : law.min;
    if (direction > 0 ? motion.position >= stop : motion.position <= stop) motion.speed = 0;
    else left -= advancePiece(motion, u, left, direction, stop);
  }
}

/** Moves within one piece of the law, to its end at most; returns the time used, s. */
function advancePiece(motion: RigidMotion, u: number, left: number, direction: number, stop: number): number {
  const { law, speed, piece } = motion;
  const against = direction > 0 ? law.againstForward : law.againstBack;
  findPiece(piece, law, u, speed, against);
  const net = piece.force - against;
  let target = net >= 0 ? piece.high : piece.low;
  if (speed < 0 && target > 0) target = 0;
  if (speed > 0 && target < 0) target = 0;
  return piece.slope === 0
    ? glide(motion, (law.topSpeed * net) / law.lag, target, left, stop)
    : relax(motion, (law.topSpeed * net) / piece.slope, law.lag / piece.slope, target, left, stop);
}

/** Motion with a lagging speed that has `toEnd` to go; ends at `target`, at `stop` or when `left` is used. */
function relax(motion: RigidMotion, toEnd: number, lag: number, target: number, left: number, stop: number): number {
  const { position, speed } = motion;
  let time = left;
  let share = lagShare(left / lag);
  let next = speed + toEnd * share;
  if (toEnd > 0 ? next >= target : next <= target) {
    next = target;
    time = Math.min(left, timeToLevel(speed, target, speed + toEnd, lag));
    share = (target - speed) / toEnd;
  }
  const reached = time === 0 ? position : position + time * (speed + toEnd * meanLagShare(time / lag, share));
  if (stop > position ? reached >= stop : reached <= stop) {
    return strike(motion, stop, relaxingTime(stop - position, speed, toEnd, lag, time));
  }
  motion.position = reached;
  motion.speed = next;
  return time;
}

/** Motion under a constant acceleration; ends as {@link relax} does. */
function glide(motion: RigidMotion, acceleration: number, target: number, left: number, stop: number): number {
  const { position, speed } = motion;
  let time = left;
  let next = speed + acceleration * left;
  if (acceleration > 0 ? next >= target : next <= target) {
    next = target;
    time = Math.min(left, (target - speed) / acceleration);
  }
  const reached = time === 0 ? position : position + time * (speed + 0.5 * acceleration * time);
  if (stop > position ? reached >= stop : reached <= stop) {
    return strike(motion, stop, glidingTime(stop - position, speed, acceleration, time));
  }
  motion.position = reached;
  motion.speed = next;
  return time;
}

function strike(motion: RigidMotion, stop: number, time: number): number {
  motion.position = stop;
  motion.speed = 0;
  return time;
}

// Within one stretch the distance only grows, so a stop is reached at one time.

function relaxingTime(distance: number, speed: number, toEnd: number, lag: number, within: number): number {
  return findRoot((t) => (t === 0 ? 0 : t * (speed + toEnd * meanLagShare(t / lag))) - distance, 0, within);
}

function glidingTime(distance: number, speed: number, acceleration: number, within: number): number {
  return findRoot((t) => t * (speed + 0.5 * acceleration * t) - distance, 0, within);
}
