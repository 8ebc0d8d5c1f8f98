import type { Move } from '../mechanism/profile.ts';
import type { MoveShape } from './trial.ts';

/** A setpoint's course from rest to rest: up, along, down; a step when it is not shaped. */
export interface SetpointCourse {
  readonly move: Move;
  /** Signed, unit/s²; 0 = a step. */
  readonly acceleration: number;
  /** s spent speeding up, and as long slowing down. */
  readonly ramp: number;
  /** s at the top speed between. */
  readonly cruise: number;
}

/**
 * Plans a move's setpoint: a step, or a trapezoid of speed (a triangle when it is too short to reach the top speed).
 *
 * @throws {RangeError} when the shape's speed or acceleration is not above zero
 */
export function planSetpoint(move: Move, shape: MoveShape | null): SetpointCourse {
  const distance = Math.abs(move.to - move.from);
  if (shape === null || distance === 0) return { move, acceleration: 0, ramp: 0, cruise: 0 };
  if (!(shape.speed > 0 && shape.acceleration > 0)) {
    throw new RangeError(
      `A shaped move needs a speed and an acceleration above 0, not ${shape.speed} and ${shape.acceleration}.`,
    );
  }
  const top = Math.min(shape.speed, Math.sqrt(distance * shape.acceleration));
  const ramp = top / shape.acceleration;
  const cruise = Math.max(0, distance / top - ramp);
  return { move, acceleration: Math.sign(move.to - move.from) * shape.acceleration, ramp, cruise };
}

/** s from the start of the move until the setpoint rests at its end; 0 for a step. */
export function courseDuration(course: SetpointCourse): number {
  return 2 * course.ramp + course.cruise;
}

/** Setpoint at `time` s after the start, ≥ 0, profile unit. */
export function setpointAt(course: SetpointCourse, time: number): number {
  const { move, acceleration, ramp, cruise } = course;
  const left = 2 * ramp + cruise - time;
  if (left <= 0) return move.to;
  if (left < ramp) return move.to - 0.5 * acceleration * left * left;
  if (time < ramp) return move.from + 0.5 * acceleration * time * time;
  return move.from + acceleration * ramp * (time - 0.5 * ramp);
}

/** Speed of the setpoint at `time`, unit/s. */
export function setpointSpeedAt(course: SetpointCourse, time: number): number {
  const { acceleration, ramp, cruise } = course;
  const left = 2 * ramp + cruise - time;
  if (left <= 0) return 0;
  return acceleration * Math.min(ramp, left, time);
}
