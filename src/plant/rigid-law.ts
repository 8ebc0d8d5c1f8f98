import type { PlantModel } from './response-model.ts';

/**
 * The numbers of one rigid mass behind a motor, laid out for the solver. Forces are fractions of the force at stall and
 * full output; speeds are in the measured quantity's unit (per second for a position loop).
 *
 *   lag·dv/dt = topSpeed·( j − drag·sgn v − hold ),   dx/dt = v
 *
 * j is the motor's current over its stall current at full output. With w = v/topSpeed and ρ = sag, the supply gives
 * V/V_oc = 1 − ρ·max(0, u·j), so
 *
 *   j = φ·(u − w) with φ = 1/(1 + ρ·u²)   while the motor drives, u·j > 0;      j = u − w   while it returns current;
 *
 * both limited to ±limit. For a constant u this is affine in v piece by piece, and never rises with v: from any start
 * the speed runs monotonically to one end value, so every event (a piece's edge, zero speed, a stop) happens once.
 */
export interface RigidLaw {
  readonly topSpeed: number;
  readonly lag: number;
  readonly drag: number;
  readonly dragBack: number;
  /** Never below drag: what starts a mechanism also keeps it moving. */
  readonly breakaway: number;
  readonly breakawayBack: number;
  /** Constant weight; 0 for an arm, whose weight varies with position. */
  readonly hold: number;
  readonly min: number;
  readonly max: number;
  readonly sag: number;
  /** Infinity when the current is not limited. */
  readonly limit: number;
}

/** Lays out a plant's numbers; bounds that do not exist become infinities. */
export function rigidLawOf(plant: PlantModel): RigidLaw {
  const { response, stops } = plant;
  return {
    topSpeed: response.topSpeed,
    lag: response.lag,
    drag: response.drag,
    dragBack: response.dragBack,
    breakaway: Math.max(response.breakaway, response.drag),
    breakawayBack: Math.max(response.breakawayBack, response.dragBack),
    hold: plant.gravity.kind === 'constant' ? response.hold : 0,
    min: stops.min ?? Number.NEGATIVE_INFINITY,
    max: stops.max ?? Number.POSITIVE_INFINITY,
    sag: plant.sag,
    limit: plant.forceLimit ?? Number.POSITIVE_INFINITY,
  };
}

/** The motor's force at standstill under output `u`. */
export function stallForce(law: RigidLaw, u: number): number {
  const force = u / (1 + law.sag * u * u);
  return Math.max(-law.limit, Math.min(law.limit, force));
}

/**
 * Which way a mechanism at rest at `x` sets off under output `u` against weight `hold`: 1, −1, or 0 when friction or a
 * stop keeps it. Exactly at breakaway it stays.
 */
export function startDirection(law: RigidLaw, u: number, x: number, hold: number): number {
  const net = stallForce(law, u) - hold;
  if (net > law.breakaway) return x < law.max ? 1 : 0;
  if (net < -law.breakawayBack) return x > law.min ? -1 : 0;
  return 0;
}
