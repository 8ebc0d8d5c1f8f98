import { lagShare, meanLagShare } from './lag.ts';
import { advanceRigid, type RigidMotion } from './rigid.ts';
import { type RigidLaw, stallForce } from './rigid-law.ts';

/**
 * What a held output does in one fixed duration while nothing happens: the coefficients of the closed form, worked out once so
 * that a tick costs no exponential. With net = output less what opposes it,
 *
 *   speed ← keep·speed + speedGain·net,      position ← position + coast·speed + travelGain·net.
 */
export interface Stride {
  /** s. */
  duration: number;
  keep: number;
  speedGain: number;
  coast: number;
  travelGain: number;
}

/** Works out the stride of a law for a duration, > 0. */
export function strideOf(law: RigidLaw, duration: number): Stride {
  const none = Number.NaN;
  const stride = { duration: none, keep: none, speedGain: none, coast: none, travelGain: none };
  setStride(stride, law, duration, 1);
  return stride;
}

/**
 * Works out a stride in place.
 *
 * @param slope force lost per topSpeed: 1 on a stiff supply
 */
export function setStride(stride: Stride, law: RigidLaw, duration: number, slope: number): void {
  const z = (duration * slope) / law.lag;
  const share = lagShare(z);
  const meanShare = meanLagShare(z, share);
  stride.duration = duration;
  stride.keep = 1 - share;
  stride.speedGain = law.topSpeed * share;
  stride.coast = duration * (1 - meanShare);
  stride.travelGain = law.topSpeed * duration * meanShare;
}

/**
 * {@link advanceRigid} for one stride: takes the worked-out coefficients where nothing happens on the way, which the end tells
 * because speed is monotone, and leaves the rest to it. The two agree to rounding.
 *
 * @param u output, fraction of full output
 */
export function strideRigid(motion: RigidMotion, stride: Stride, u: number): void {
  // The tries are apart from the events, and small, so that a compiler can put them into a caller's loop.
  const isDone = motion.law.isPlain ? tryStride(motion, stride, u) : tryBoundedStride(motion, stride, u);
  if (!isDone) advanceRigid(motion, u, stride.duration);
}

/** Strides where the motor's force is u − w; false, with nothing done, when something happens on the way. */
function tryStride(motion: RigidMotion, stride: Stride, u: number): boolean {
  const { law, position, speed } = motion;
  if (speed === 0) return u <= law.startForward && u >= law.startBack;
  const net = u - (speed > 0 ? law.againstForward : law.againstBack);
  const nextSpeed = stride.keep * speed + stride.speedGain * net;
  const nextPosition = position + (stride.coast * speed + stride.travelGain * net);
  if (!(nextSpeed * speed > 0 && nextPosition < law.max && nextPosition > law.min)) return false;
  motion.speed = nextSpeed;
  motion.position = nextPosition;
  return true;
}

/** The same on a supply that sags or under a limited current. */
function tryBoundedStride(motion: RigidMotion, stride: Stride, u: number): boolean {
  const { law, position, speed } = motion;
  const { topSpeed, limit } = law;
  if (speed === 0) {
    const force = stallForce(law, u);
    return force <= law.startForward && force >= law.startBack;
  }
  const free = topSpeed * u;
  const isDriving = (speed - free) * u < 0;
  const phi = isDriving ? 1 / (1 + law.sag * u * u) : 1;
  const against = (speed > 0 ? law.againstForward : law.againstBack) / phi;
  let { coast } = stride;
  let share = stride.speedGain / topSpeed;
  if (phi !== 1) {
    // On a slope of φ the lag is 1/φ as long; everything else follows from the share of it that is gone.
    const z = (stride.duration * phi) / law.lag;
    share = lagShare(z);
    coast = stride.duration * (1 - meanLagShare(z, share));
  }
  const end = topSpeed * (u - against);
  const nextSpeed = speed + (end - speed) * share;
  const nextPosition = position + (coast * speed + (stride.duration - coast) * end);
  const isSamePiece =
    nextSpeed * speed > 0 &&
    (nextSpeed - free) * (speed - free) > 0 &&
    Math.abs(free - speed) * phi < limit * topSpeed &&
    Math.abs(free - nextSpeed) * phi < limit * topSpeed;
  if (!(isSamePiece && nextPosition < law.max && nextPosition > law.min)) return false;
  motion.speed = nextSpeed;
  motion.position = nextPosition;
  return true;
}
