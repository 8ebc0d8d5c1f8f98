import { type Course, newCourse, positionAt, setCourse, speedAt } from './course.ts';
import type { Gravity, PlantModel } from './response-model.ts';
import { findPiece, newPiece, type Piece, type RigidLaw, rigidLawOf, startDirection } from './rigid-law.ts';
import { findRoot } from './root.ts';

/** An arm in motion: its weight turns with it. Changed in place by {@link advanceArm}. */
export interface ArmMotion {
  readonly law: RigidLaw;
  /** Output that carries the arm when level. */
  readonly weight: number;
  readonly level: number;
  readonly radiansPerUnit: number;
  position: number;
  speed: number;
  readonly piece: Piece;
  readonly course: Course;
}

// The most an arm may turn in a sub-step, rad. A sub-step spans half the lag at most, down to a tenth of that turn: a lag shorter
// still bends the path too little to matter. Its error against a general ODE solver: test/plant/arm.test.ts.
const TURN = 0.02;
const LEAST_TURN = 0.002;
const SHARE_OF_LAG = 0.5;
// No tick needs as many; a model that a fit tries out may (a thousand turns a second), and must not hold it up.
const MOST_STEPS = 4000;

/** Puts an arm at its start. */
export function startArm(
  plant: PlantModel,
  gravity: Extract<Gravity, { kind: 'cosine' }>,
  start: { readonly position: number; readonly speed: number },
): ArmMotion {
  return {
    law: rigidLawOf(plant),
    weight: plant.response.hold,
    level: gravity.level,
    radiansPerUnit: gravity.radiansPerUnit,
    position: start.position,
    speed: start.speed,
    piece: newPiece(),
    course: newCourse(),
  };
}

/** Output that carries the arm at `position`. */
function weightAt(arm: ArmMotion, position: number): number {
  return arm.weight * Math.cos((position - arm.level) * arm.radiansPerUnit);
}

const MOST_EVENTS = 16;

/**
 * Moves an arm under a held output, in sub-steps. Within one, the weight is taken as the parabola in time through its values at the
 * start, the middle and the end of the motion that it causes itself (found by iteration); the speed under it has a closed form,
 * so a short lag needs no short steps, and events are found on that closed form: the same as {@link advanceRigid}'s.
 *
 * @param u output, fraction of full output
 * @param duration s, ≥ 0
 */
export function advanceArm(arm: ArmMotion, u: number, duration: number): void {
  const steps = stepsFor(arm, u, duration);
  for (let step = 0; step < steps; step++) {
    let left = duration / steps;
    for (let events = 0; left > 0 && events < MOST_EVENTS; events++) {
      const { law, position, speed } = arm;
      const direction = speed === 0 ? startDirection(law, u, position, weightAt(arm, position)) : Math.sign(speed);
      if (direction === 0) return; // at rest the weight stays as it is, and so does the arm until the output changes
      const stop = direction > 0 ? law.max : law.min;
      if (direction > 0 ? position >= stop : position <= stop) arm.speed = 0;
      else left -= advanceWithin(arm, u, left, direction, stop);
    }
  }
}

/** Sub-steps of a move, by the fastest it can get: from here at full acceleration, or at the end value of all forces together. */
function stepsFor(arm: ArmMotion, u: number, duration: number): number {
  const { law, speed } = arm;
  const force = Math.abs(u) + Math.abs(arm.weight) + Math.max(law.againstForward, -law.againstBack);
  const end = Math.max(Math.abs(speed), law.topSpeed * force);
  const fastest = Math.min(end, Math.abs(speed) + (law.topSpeed / law.lag) * force * duration);
  const turnRate = fastest * arm.radiansPerUnit;
  const subStep = Math.min(TURN / turnRate, Math.max(LEAST_TURN / turnRate, SHARE_OF_LAG * law.lag));
  return Math.min(MOST_STEPS, Math.max(1, Math.ceil(duration / subStep)));
}

/** Moves to the next event, or for `left`; returns the time used. */
function advanceWithin(arm: ArmMotion, u: number, left: number, direction: number, stop: number): number {
  const { law, piece, course } = arm;
  const drag = direction > 0 ? law.againstForward : law.againstBack;
  findPiece(piece, law, u, arm.speed, drag + weightAt(arm, arm.position));
  layCourse(arm, left);
  const low = direction > 0 ? Math.max(0, piece.low) : piece.low;
  const high = direction < 0 ? Math.min(0, piece.high) : piece.high;

  let share = 1;
  let speed = speedAt(course, 1, course.whole);
  let position = positionAt(course, 1, course.whole);
  // The middle is looked at, too: a speed that dips through zero and back within one sub-step is an event.
  const middle = speedAt(course, 0.5, course.half);
  const level = speed <= low || middle <= low ? low : speed >= high || middle >= high ? high : Number.NaN;
  if (!Number.isNaN(level) && arm.speed !== level) {
    const until = (level === low ? middle <= low : middle >= high) ? 0.5 : 1;
    share = findRoot((s) => speedAt(course, s) - level, 0, until);
    speed = level;
    position = positionAt(course, share);
  }
  if (direction > 0 ? position >= stop : position <= stop) {
    share = findRoot((s) => positionAt(course, s) - stop, 0, share);
    speed = 0;
    position = stop;
  }
  arm.position = position;
  arm.speed = speed;
  return share * left;
}

// The weight's change moves the arm in the third order of the step only, so three rounds leave nothing to iterate.
const ROUNDS = 3;

/** Lays the course of the next `left` seconds in the arm's piece. */
function layCourse(arm: ArmMotion, left: number): void {
  const { law, piece, course } = arm;
  const scale = law.topSpeed / law.lag;
  // What the motor's straight line gives at standstill, less the drag.
  const weight = weightAt(arm, arm.position);
  const free = piece.net + weight + (piece.slope * arm.speed) / law.topSpeed;
  const start = scale * (free - weight);
  setCourse(course, arm.position, arm.speed, left, piece.slope / law.lag);
  course.a0 = start;
  course.a1 = 0;
  course.a2 = 0;
  for (let round = 0; round < ROUNDS; round++) {
    const middle = scale * (free - weightAt(arm, positionAt(course, 0.5, course.half)));
    const end = scale * (free - weightAt(arm, positionAt(course, 1, course.whole)));
    course.a1 = -3 * start + 4 * middle - end;
    course.a2 = 2 * start - 4 * middle + 2 * end;
  }
}
