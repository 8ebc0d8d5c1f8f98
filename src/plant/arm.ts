import type { Gravity, PlantModel } from './response-model.ts';
import { advanceRigid, type RigidMotion } from './rigid.ts';
import { type RigidLaw, rigidLawOf } from './rigid-law.ts';

/** An arm in motion: its weight turns with it. Changed in place by {@link advanceArm}. */
export interface ArmMotion {
  readonly law: RigidLaw;
  readonly weight: number;
  readonly level: number;
  readonly radiansPerUnit: number;
  position: number;
  speed: number;
}

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
  };
}

const SUB_STEP = 0.001;

/** Moves an arm under a held output. */
export function advanceArm(motion: ArmMotion, u: number, duration: number): void {
  const steps = Math.max(1, Math.ceil(duration / SUB_STEP - 1e-9));
  for (let step = 0; step < steps; step++) {
    const hold = motion.weight * Math.cos((motion.position - motion.level) * motion.radiansPerUnit);
    const piece: RigidMotion = { law: { ...motion.law, hold }, position: motion.position, speed: motion.speed };
    advanceRigid(piece, u, duration / steps);
    motion.position = piece.position;
    motion.speed = piece.speed;
  }
}
