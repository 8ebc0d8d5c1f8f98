import { type ArmMotion, advanceArm, startArm } from './arm.ts';
import { advanceCoupled, type CoupledMotion, startCoupled } from './coupled.ts';
import type { PlantModel } from './response-model.ts';
import { advanceRigid, type RigidMotion, startRigid } from './rigid.ts';
import { rigidLawOf } from './rigid-law.ts';

/** Where a mechanism starts; for a speed loop `speed` is the quantity itself and `position` its integral. */
export interface Start {
  readonly position: number;
  readonly speed: number;
}

/** A mechanism in motion, whatever solver it needs: read `position` and `speed`, change it only by {@link advance}. */
export type Motion =
  | { readonly solver: 'exact'; readonly state: RigidMotion }
  | { readonly solver: 'arm'; readonly state: ArmMotion }
  | { readonly solver: 'coupled'; readonly state: CoupledMotion };

/**
 * Puts a plant at its start. Constant weight on one rigid mass is solved in closed form; weight that turns with the
 * joint, backlash and compliance are solved in sub-steps.
 */
export function startMotion(plant: PlantModel, start: Start): Motion {
  const { coupling, gravity } = plant;
  if (coupling) return { solver: 'coupled', state: startCoupled(plant, coupling, start) };
  if (gravity.kind === 'cosine') return { solver: 'arm', state: startArm(plant, gravity, start) };
  return { solver: 'exact', state: startRigid(rigidLawOf(plant), start.position, start.speed) };
}

/**
 * Moves a mechanism under an output held for `duration`.
 *
 * @param output fraction of full output, as it arrives at the motor (delays are the caller's)
 * @param duration s, ≥ 0
 */
export function advance(motion: Motion, output: number, duration: number): void {
  if (motion.solver === 'exact') advanceRigid(motion.state, output, duration);
  else if (motion.solver === 'arm') advanceArm(motion.state, output, duration);
  else advanceCoupled(motion.state, output, duration);
}
