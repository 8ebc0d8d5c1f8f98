import { lagShare, meanLagShare, timeToLevel } from './lag.ts';
import { type RigidLaw, startDirection } from './rigid-law.ts';

/** A rigid mechanism in motion: changed in place by {@link advanceRigid}. */
export interface RigidMotion {
  readonly law: RigidLaw;
  position: number;
  speed: number;
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
    const direction = motion.speed === 0 ? startDirection(law, u, motion.position, law.hold) : Math.sign(motion.speed);
    if (direction === 0) return;
    const stop = direction > 0 ? law.max : law.min;
    if (direction > 0 ? motion.position >= stop : motion.position <= stop) motion.speed = 0;
    else left -= advancePiece(motion, u, left, direction, stop);
  }
}

/** Moves within one piece of the law, to its end at most; returns the time used, s. */
function advancePiece(motion: RigidMotion, u: number, left: number, direction: number, stop: number): number {
  const { law, speed: v } = motion;
  const { topSpeed, limit } = law;
  const phi = 1 / (1 + law.sag * u * u);
  // The force falls with speed by φ on the side of edge1 where the motor drives, by 1 where it returns current.
  const below = u > 0 ? phi : 1;
  const above = u < 0 ? phi : 1;
  const edge0 = topSpeed * (u - limit / below);
  const edge1 = topSpeed * u;
  const edge2 = topSpeed * (u + limit / above);

  const force = v < edge1 ? Math.min(limit, below * (u - v / topSpeed)) : Math.max(-limit, above * (u - v / topSpeed));
  const pull = force - law.hold - (direction > 0 ? law.drag : -law.dragBack);
  let slope: number;
  let target: number;
  if (pull >= 0) {
    slope = v < edge0 ? 0 : v < edge1 ? below : v < edge2 ? above : 0;
    target = v < edge0 ? edge0 : v < edge1 && phi < 1 ? edge1 : v < edge2 ? edge2 : Number.POSITIVE_INFINITY;
    if (v < 0 && target > 0) target = 0;
  } else {
    slope = v <= edge0 ? 0 : v <= edge1 ? below : v <= edge2 ? above : 0;
    target = v > edge2 ? edge2 : v > edge1 && phi < 1 ? edge1 : v > edge0 ? edge0 : Number.NEGATIVE_INFINITY;
    if (v > 0 && target < 0) target = 0;
  }
  const gain = topSpeed * pull;
  return slope === 0
    ? glide(motion, gain / law.lag, target, left, stop)
    : relax(motion, gain / slope, law.lag / slope, target, left, stop);
}

/** Motion with a lagging speed that has `toEnd` to go; ends at `target`, at `stop` or when `left` is used. */
function relax(motion: RigidMotion, toEnd: number, lag: number, target: number, left: number, stop: number): number {
  const { position, speed } = motion;
  const end = speed + toEnd;
  let time = left;
  let next = speed + toEnd * lagShare(left / lag);
  if (toEnd > 0 ? next >= target : next <= target) {
    next = target;
    time = Math.min(left, timeToLevel(speed, target, end, lag));
  }
  const reached = time === 0 ? position : position + time * (speed + toEnd * meanLagShare(time / lag));
  if (beyond(reached, stop, position)) {
    return strike(motion, stop, time, (t) => [
      t * (speed + toEnd * meanLagShare(t / lag)),
      speed + toEnd * lagShare(t / lag),
    ]);
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
  if (beyond(reached, stop, position)) {
    return strike(motion, stop, time, (t) => [t * (speed + 0.5 * acceleration * t), speed + acceleration * t]);
  }
  motion.position = reached;
  motion.speed = next;
  return time;
}

function beyond(reached: number, stop: number, from: number): boolean {
  return stop > from ? reached >= stop : reached <= stop;
}

/**
 * Comes to rest at the stop; returns the time at which it is hit. The distance covered is monotone up to `within`, so a
 * Newton step that leaves the bracket is replaced by a halving.
 *
 * @param path distance covered and speed after t seconds
 */
function strike(
  motion: RigidMotion,
  stop: number,
  within: number,
  path: (t: number) => readonly [distance: number, speed: number],
): number {
  const distance = stop - motion.position;
  const sense = Math.sign(distance);
  let low = 0;
  let high = within;
  let time = Math.min(within, distance / (path(within)[0] / within));
  for (let round = 0; round < 80; round++) {
    const [covered, speed] = path(time);
    const miss = covered - distance;
    if (miss * sense > 0) high = time;
    else low = time;
    let next = time - miss / speed;
    if (!(next >= low && next <= high)) next = (low + high) / 2;
    if (Math.abs(next - time) <= 1e-15 * within) break;
    time = next;
  }
  motion.position = stop;
  motion.speed = 0;
  return time;
}
