/**
 * What a log can teach of a mechanism, in the profile's own units; see the design's model, section 1.
 *
 *   τ·dv/dt = −v + K·( u(t−L) − c·sgn v − h(x) ),  dx/dt = v;  at rest it stays while |u − h| is within breakaway.
 *
 * Output u is a fraction of full output here, whatever unit the controller uses.
 */
export interface ResponseModel {
  /** K, unit/s for a position loop; for a speed loop the quantity itself at full output. */
  readonly topSpeed: number;
  /** τ, s. */
  readonly lag: number;
  /** c of motion forward (towards larger readings), fraction of full output. */
  readonly drag: number;
  /** c of motion back. */
  readonly dragBack: number;
  /** s ≥ drag: starts it forward from rest. */
  readonly breakaway: number;
  /** s ≥ dragBack: starts it back from rest. */
  readonly breakawayBack: number;
  /** h: output that carries its weight (at level for an arm); 0 where gravity has no say. */
  readonly hold: number;
  /** L, s from output to measured, beyond the sample-and-hold. */
  readonly delay: number;
}

/** How the weight acts along the travel. */
export type Gravity =
  | { readonly kind: 'none' }
  | { readonly kind: 'constant' }
  | {
      readonly kind: 'cosine';
      /** Reading at which the arm is level, profile unit. */
      readonly level: number;
      /** Radians in one profile unit. */
      readonly radiansPerUnit: number;
    };

/** Names of the parameters that are learnt and reported, in the order of reports. */
export const MODEL_PARAMETERS = ['topSpeed', 'lag', 'drag', 'breakaway', 'hold', 'delay'] as const;
export type ModelParameter = (typeof MODEL_PARAMETERS)[number];

/** Everything the solver needs to move a simulated mechanism: the response model and what bounds it. */
export interface PlantModel {
  readonly quantity: 'position' | 'speed';
  readonly response: ResponseModel;
  readonly gravity: Gravity;
  /** Hard stops in the profile's unit; null = none on that side. Position only. */
  readonly stops: { readonly min: number | null; readonly max: number | null };
  /** Supply resistance over winding resistance, all motors: n·R_s/R; 0 = a stiff supply. */
  readonly sag: number;
  /** Force limit by current, as a fraction of the force at stall and full output; null = none. */
  readonly forceLimit: number | null;
  /** Two masses with lost motion or a spring between; null = one rigid mass. Sub-stepped when present. */
  readonly coupling: Coupling | null;
}

export interface Coupling {
  /** Total gap, profile unit. */
  readonly backlash: number;
  /** Natural frequency of the load against a blocked motor, rad/s. */
  readonly frequency: number;
  /** Damping ratio of that motion. */
  readonly damping: number;
  /** Share of the total moving mass that sits on the motor's side, 0 to 1 (exclusive). */
  readonly motorShare: number;
}
