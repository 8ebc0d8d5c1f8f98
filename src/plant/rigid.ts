import { lagShare, meanLagShare, timeToLevel } from './lag.ts';
import { findPiece, newPiece, type Piece, type RigidLaw, startDirection } from './rigid-law.ts';
import { findRoot } from './root.ts';

/** A rigid mechanism in motion: changed in place by {@link advanceRigid}. */
export interface RigidMotion {
  readonly law: RigidLaw;
  position: number;
  speed: number;
  /** What is left of the duration that it is being moved for, s. */
  left: number;
  /** The piece of the law that it is in. */
  readonly piece: Piece;
}

/** Puts a rigid mechanism at its start. */
export function startRigid(law: RigidLaw, position: number, speed: number): RigidMotion {
  // NaN, not 0: an engine that first sees a whole number in a field plans for whole numbers there.
  const motion = { law, position: Number.NaN, speed: Number.NaN, left: Number.NaN, piece: newPiece() };
  motion.position = position;
  motion.speed = speed;
  motion.left = 0;
  return motion;
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
  const { law, piece } = motion;
  motion.left = duration;
  for (let events = 0; motion.left > 0 && events < MOST_EVENTS; events++) {
    const { speed, position } = motion;
    const direction = speed === 0 ? startDirection(law, u, position, 0) : speed > 0 ? 1 : -1;
    if (direction === 0) return;
    piece.stop = direction > 0 ? law.max : law.min;
    if (direction > 0 ? position >= piece.stop : position <= piece.stop) {
      motion.speed = 0;
      continue;
    }
    findPiece(piece, law, u, speed, direction > 0 ? law.againstForward : law.againstBack);
    if (speed < 0 ? piece.target > 0 : speed > 0 && piece.target < 0) piece.target = 0;
    if (piece.slope > 0) relax(motion);
    else glide(motion);
  }
}

/** Moves on where the force falls with speed, so that speed lags towards an end value: to the target, the stop, or the time's end. */
function relax(motion: RigidMotion): void {
  const { position, speed, left, law, piece } = motion;
  const { target, stop } = piece;
  const lag = law.lag / piece.slope;
  const toEnd = (law.topSpeed * piece.net) / piece.slope;
  const end = speed + toEnd;
  let time = (toEnd < 0 ? end < target : end > target)
    ? timeToLevel(speed, target, end, lag)
    : Number.POSITIVE_INFINITY;
  let next = target;
  let share = (target - speed) / toEnd;
  if (time > left) {
    time = left;
    share = lagShare(left / lag);
    next = speed + toEnd * share;
  }
  const reached = time === 0 ? position : position + time * (speed + toEnd * meanLagShare(time / lag, share));
  if (stop > position ? reached >= stop : reached <= stop) {
    strike(motion, relaxingTime(stop - position, speed, toEnd, lag, time));
    return;
  }
  motion.position = reached;
  motion.speed = next;
  motion.left = left - time;
}

/** The same at the current limit, where the force is constant. */
function glide(motion: RigidMotion): void {
  const { position, speed, left, law, piece } = motion;
  const { target, stop } = piece;
  const acceleration = (law.topSpeed * piece.net) / law.lag;
  let time = left;
  let next = speed + acceleration * left;
  if (acceleration < 0 ? next <= target : next >= target) {
    next = target;
    time = Math.min(left, (target - speed) / acceleration);
  }
  const reached = time === 0 ? position : position + time * (speed + 0.5 * acceleration * time);
  if (stop > position ? reached >= stop : reached <= stop) {
    strike(motion, glidingTime(stop - position, speed, acceleration, time));
    return;
  }
  motion.position = reached;
  motion.speed = next;
  motion.left = left - time;
}

function strike(motion: RigidMotion, time: number): void {
  motion.position = motion.piece.stop;
  motion.speed = 0;
  motion.left -= time;
}

// Within one piece the distance only grows, so a stop is reached at one time.

function relaxingTime(distance: number, speed: number, toEnd: number, lag: number, within: number): number {
  return findRoot((t) => (t === 0 ? 0 : t * (speed + toEnd * meanLagShare(t / lag))) - distance, 0, within);
}

function glidingTime(distance: number, speed: number, acceleration: number, within: number): number {
  return findRoot((t) => t * (speed + 0.5 * acceleration * t) - distance, 0, within);
}
