import type { ControllerSettings, Gains } from '../controller/settings.ts';
import type { Move } from '../mechanism/profile.ts';
import type { PlantModel } from '../plant/response-model.ts';

/** What one trial asks of a plant: the gains, the move and the bounds. */
export interface TrialRequest {
  readonly controller: ControllerSettings;
  readonly gains: Gains;
  readonly move: Move;
  /** s. */
  readonly duration: number;
  /** Largest output, fraction of full output. */
  readonly outputCap: number;
  /** Wrap width of the measured quantity, or null. */
  readonly continuous: number | null;
  /** Trapezoidal setpoint, or null for a step. */
  readonly shape: MoveShape | null;
}

/** A trapezoidal move of the setpoint; unit/s and unit/s². */
export interface MoveShape {
  readonly speed: number;
  readonly acceleration: number;
}

/** A simulated mechanism and how it is read: what the pure trial runs on. */
export interface SimulatedMechanism {
  readonly plant: PlantModel;
  readonly reading: Reading;
}

/** How the sensor and the controller's clock see the motion; all randomness comes from the trial's seed. */
export interface Reading {
  /** Profile unit; 0 = continuous. */
  readonly resolution: number;
  /** One sigma, profile unit. */
  readonly noise: number;
  /** s from the motion to the reading. */
  readonly delay: number;
  /** s between the sensor's own updates; 0 = read at each tick. */
  readonly period: number;
  /** One sigma of the tick's spacing, as a fraction of the period; 0 = even ticks. */
  readonly jitter: number;
}

/** The stages of a run, in order; contracts and coach. */
export const STAGES = ['ready', 'proportional', 'integral', 'derivative', 'proof'] as const;
export type Stage = (typeof STAGES)[number];
