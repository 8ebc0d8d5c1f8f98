import { type ArmMotion, advanceArm, startArm } from './arm.ts';
import type { Coupling, PlantModel } from './response-model.ts';

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
    arm: startArm(
      plant,
      gravity.kind === 'cosine' ? gravity : { kind: 'cosine', level: 0, radiansPerUnit: 1e-9 },
      start,
    ),
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
