import type { ControllerSettings, Gains } from '../controller/settings.ts';
import type { Drive, Friction, Load, Motor, Sensor, Supply } from '../plant/machine.ts';

export const KINDS = ['travel', 'turn', 'lift', 'arm', 'spin'] as const;
export type Kind = (typeof KINDS)[number];

export const POSITION_UNITS = ['m', 'cm', 'mm', 'in', 'ft', 'rad', 'deg', 'rev'] as const;
export const SPEED_UNITS = ['m/s', 'cm/s', 'mm/s', 'in/s', 'ft/s', 'rad/s', 'deg/s', 'rev/s', 'rpm'] as const;
export type Unit = (typeof POSITION_UNITS)[number] | (typeof SPEED_UNITS)[number];

export const HAZARDS = ['drives', 'falls', 'pinch', 'spins', 'stored-energy', 'overhead'] as const;
export type Hazard = (typeof HAZARDS)[number];

/** Hard travel limits in the profile's unit, and the largest output as a fraction of full output. */
export interface Limits {
  readonly min: number | null;
  readonly max: number | null;
  readonly outputCap: number;
}

/** What the loop must meet, and the moves it is proven on. */
export interface Target {
  /** Half-width of the band, profile unit. */
  readonly tolerance: number;
  /** %. */
  readonly overshoot: number;
  /** s. */
  readonly settlingTime: number;
  readonly moves: readonly (readonly [from: number, to: number])[];
}

/** All that is known of one mechanism; contracts, section 1. Immutable: a change makes a new one. */
export interface Profile {
  readonly format: 'holdfast/profile@1';
  readonly name: string;
  readonly title: string;
  readonly kind: Kind;
  readonly quantity: 'position' | 'speed';
  readonly unit: Unit;
  /** Wrap width in `unit`, turn only; null = does not wrap. */
  readonly continuous: number | null;
  readonly motor: Motor | null;
  readonly drive: Drive | null;
  readonly load: Load | null;
  readonly friction: Friction | null;
  readonly supply: Supply | null;
  readonly sensor: Sensor | null;
  readonly limits: Limits;
  readonly controller: ControllerSettings;
  readonly target: Target;
  readonly gains: Gains;
  readonly hazards: readonly Hazard[];
  readonly notes: string;
}

/** One move of the setpoint, profile unit. */
export interface Move {
  readonly from: number;
  readonly to: number;
}
