/** One motor, from its data sheet. */
export interface Motor {
  /** V. */
  readonly nominalVoltage: number;
  /** rpm, unloaded at nominal voltage. */
  readonly freeSpeed: number;
  /** A, unloaded at nominal voltage. */
  readonly freeCurrent: number;
  /** N·m at nominal voltage. */
  readonly stallTorque: number;
  /** A at nominal voltage. */
  readonly stallCurrent: number;
  /** How many of them drive the mechanism. */
  readonly count: number;
  /** kg·m², of one rotor; absent or null = not known (then it is taken as nil). */
  readonly rotorInertia?: number | null | undefined;
}

export interface Drive {
  /** Motor turns for one turn of the output. */
  readonly reduction: number;
  /** m, of the wheel or drum that turns rotation into travel; null for joints and spins. */
  readonly radius: number | null;
  /** 0 to 1. */
  readonly efficiency: number;
  /** Total lost motion at the output, profile unit; absent or null = none known. */
  readonly backlash?: number | null | undefined;
  /** Stiffness between motor and load, N/m or N·m/rad; absent or null = rigid. */
  readonly stiffness?: number | null | undefined;
}

export interface Load {
  /** kg; travel, lift, arm. */
  readonly mass: number | null;
  /** kg·m² about the joint, without the rotor; turn, arm, spin. */
  readonly inertia: number | null;
  /** m from the joint; arm. */
  readonly centreOfMass: number | null;
  /** Reading, in the profile's unit, at which the arm is level. */
  readonly levelAngle: number | null;
}

/** Fractions of full output; null = unknown. */
export interface Friction {
  readonly drag: number | null;
  readonly breakaway: number | null;
}

export interface Supply {
  /** V with nothing drawing. */
  readonly openCircuit: number;
  /** Ω. */
  readonly resistance: number;
  /** A per motor; null = none. */
  readonly currentLimit: number | null;
}

export interface Sensor {
  /** Smallest step of a reading, profile unit; 0 = none. */
  readonly resolution: number;
  /** One sigma, profile unit. */
  readonly noise: number;
  /** s from the motion to the reading. */
  readonly delay: number;
}

/** The physical numbers of a mechanism, every part of which may be unknown. */
export interface Machine {
  readonly motor: Motor | null;
  readonly drive: Drive | null;
  readonly load: Load | null;
  readonly friction: Friction | null;
  readonly supply: Supply | null;
  readonly sensor: Sensor | null;
}
