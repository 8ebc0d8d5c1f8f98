import { type ArmMotion, advanceArm } from './arm.ts';
import type { Coupling, PlantModel } from './response-model.ts';
import { rigidLawOf } from './rigid-law.ts';

/** Two masses with lost motion or a spring between; `position` and `speed` are the load's, which is what is measured. */
export interface CoupledMotion {
  readonly arm: ArmMotion;
  position: number;
  speed: number;
}

/** Puts a coupled mechanism at its start, both masses alike. */
export function startCoupled(
  plant: PlantModel,
  _coupling: Coupling,
  start: { readonly position: number; readonly speed: number },
): CoupledMotion {
  const { gravity } = plant;
  return {
    arm: {
      law: rigidLawOf(plant),
      weight: gravity.kind === 'cosine' ? plant.response.hold : 0,
      level: gravity.kind === 'cosine' ? gravity.level : 0,
      radiansPerUnit: gravity.kind === 'cosine' ? gravity.radiansPerUnit : 0,
      ...start,
    },
    ...start,
  };
}

/** Moves a coupled mechanism under a held output. */
export function advanceCoupled(motion: CoupledMotion, u: number, duration: number): void {
  motion.arm.position = motion.position;
  motion.arm.speed = motion.speed;
  advanceArm(motion.arm, u, duration);
  motion.position = motion.arm.position;
  motion.speed = motion.arm.speed;
}
