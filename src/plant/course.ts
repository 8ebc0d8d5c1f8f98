import { newPhi, type Phi, setPhi } from './phi.ts';

/**
 * Motion in one sub-step: a first-order lag under an acceleration that is a parabola in time, in closed form. With s the share of
 * the sub-step that is gone,  dv/dt = a0 + a1·s + a2·s² − rate·v,  dx/dt = v.
 */
export interface Course {
  position: number;
  speed: number;
  /** s. */
  duration: number;
  /** 1/s; 0 = no lag, pure acceleration. */
  rate: number;
  a0: number;
  a1: number;
  a2: number;
  /** φ functions at half and at the whole of the sub-step, which every step asks for. */
  readonly half: Phi;
  readonly whole: Phi;
  readonly part: Phi;
}

/** An empty course, to be set. */
export function newCourse(): Course {
  return {
    position: 0,
    speed: 0,
    duration: 0,
    rate: 0,
    a0: 0,
    a1: 0,
    a2: 0,
    half: newPhi(),
    whole: newPhi(),
    part: newPhi(),
  };
}

/** Starts a course; its φ functions are kept from the last one where duration and rate are the same. */
export function setCourse(course: Course, position: number, speed: number, duration: number, rate: number): void {
  course.position = position;
  course.speed = speed;
  if (course.duration === duration && course.rate === rate) return;
  course.duration = duration;
  course.rate = rate;
  setPhi(course.half, 0.5 * rate * duration);
  setPhi(course.whole, rate * duration);
}

/** Speed when a share `s` of the sub-step is gone; `phi` spares working it out when it is at hand. */
export function speedAt(course: Course, s: number, phi: Phi = partOf(course, s)): number {
  const { speed, duration, rate, a0, a1, a2 } = course;
  const driven = phi.one * a0 + s * (phi.two * a1 + s * phi.three * 2 * a2);
  return speed + duration * s * (driven - rate * speed * phi.one);
}

/** Position when a share `s` of the sub-step is gone. */
export function positionAt(course: Course, s: number, phi: Phi = partOf(course, s)): number {
  const { position, speed, duration, a0, a1, a2 } = course;
  const t = duration * s;
  return position + t * (speed * phi.one + t * (a0 * phi.two + s * (a1 * phi.three + s * 2 * a2 * phi.four)));
}

function partOf(course: Course, s: number): Phi {
  setPhi(course.part, s * course.rate * course.duration);
  return course.part;
}
