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
  /** Constant weight; 0 for an arm, whose weight varies with position. */
  readonly hold: number;
  /** Force that opposes motion forward, hold + drag, and back, hold − dragBack. */
  readonly againstForward: number;
  readonly againstBack: number;
  /** Force above which it sets off forward, and below which back. Never inside the drag: what starts it keeps it moving. */
  readonly startForward: number;
  readonly startBack: number;
  readonly min: number;
  readonly max: number;
  readonly sag: number;
  /** Infinity when the current is not limited. */
  readonly limit: number;
  /** Neither sag nor limit: the force is u − w at every speed. */
  readonly isPlain: boolean;
}

/** Lays out a plant's numbers; bounds that do not exist become infinities. */
export function rigidLawOf(plant: PlantModel): RigidLaw {
  const { response, stops, sag, forceLimit } = plant;
  const hold = plant.gravity.kind === 'constant' ? response.hold : 0;
  return {
    topSpeed: response.topSpeed,
    lag: response.lag,
    hold,
    againstForward: hold + response.drag,
    againstBack: hold - response.dragBack,
    startForward: hold + Math.max(response.breakaway, response.drag),
    startBack: hold - Math.max(response.breakawayBack, response.dragBack),
    min: stops.min ?? Number.NEGATIVE_INFINITY,
    max: stops.max ?? Number.POSITIVE_INFINITY,
    sag,
    limit: forceLimit ?? Number.POSITIVE_INFINITY,
    isPlain: sag === 0 && forceLimit === null,
  };
}

/** The motor's force at standstill under output `u`. */
export function stallForce(law: RigidLaw, u: number): number {
  if (law.isPlain) return u;
  const force = u / (1 + law.sag * u * u);
  return Math.max(-law.limit, Math.min(law.limit, force));
}

/** The motor's force at speed `v` under output `u`. */
export function motorForce(law: RigidLaw, u: number, v: number): number {
  const slip = u - v / law.topSpeed;
  const force = slip * u > 0 ? slip / (1 + law.sag * u * u) : slip;
  return Math.max(-law.limit, Math.min(law.limit, force));
}

/**
 * Which way a mechanism at rest at `x` sets off under output `u` when `extra` weight comes on top of the law's own: 1, −1,
 * or 0 when friction or a stop keeps it. Exactly at breakaway it stays.
 */
export function startDirection(law: RigidLaw, u: number, x: number, extra: number): number {
  const net = stallForce(law, u) - extra;
  if (net > law.startForward) return x < law.max ? 1 : 0;
  if (net < law.startBack) return x > law.min ? -1 : 0;
  return 0;
}

/**
 * The stretch of speeds around some speed in which the motor's force is one straight line, and where the motion in it is bound
 * for. Filled by {@link findPiece}, and by the solver as far as the stop.
 */
export interface Piece {
  /** Force lost per topSpeed of speed: 1, φ, or 0 at the current limit. */
  slope: number;
  /** Force that is left to change the speed. */
  net: number;
  low: number;
  high: number;
  /** The end of the piece that the speed runs to, or the speed at which the solver has to look again. */
  target: number;
  /** Position of the stop ahead. */
  stop: number;
}

/** An empty piece, to be filled. */
export function newPiece(): Piece {
  const none = Number.NaN;
  return { slope: none, net: none, low: none, high: none, target: none, stop: none };
}

/**
 * Finds the piece in which the speed is about to move; on an edge that is the one it moves into.
 *
 * @param against force that opposes the motor's
 */
export function findPiece(piece: Piece, law: RigidLaw, u: number, v: number, against: number): void {
  if (law.isPlain) {
    const net = u - v / law.topSpeed - against;
    piece.slope = 1;
    piece.net = net;
    piece.low = Number.NEGATIVE_INFINITY;
    piece.high = Number.POSITIVE_INFINITY;
    piece.target = net < 0 ? Number.NEGATIVE_INFINITY : Number.POSITIVE_INFINITY;
  } else findBoundedPiece(piece, law, u, v, against);
}

function findBoundedPiece(piece: Piece, law: RigidLaw, u: number, v: number, against: number): void {
  const { topSpeed, limit } = law;
  const phi = 1 / (1 + law.sag * u * u);
  // The force falls with speed by φ on the side of u·topSpeed where the motor drives, by 1 where it returns current.
  const below = u > 0 ? phi : 1;
  const above = u < 0 ? phi : 1;
  const limited = topSpeed * (u - limit / below);
  const free = topSpeed * u;
  const limitedBack = topSpeed * (u + limit / above);
  piece.net = motorForce(law, u, v) - against;
  const isRising = piece.net >= 0;
  if (v < limited || (v === limited && !isRising)) setEdges(piece, 0, Number.NEGATIVE_INFINITY, limited);
  else if (v > limitedBack || (v === limitedBack && isRising))
    setEdges(piece, 0, limitedBack, Number.POSITIVE_INFINITY);
  else if (phi === 1) setEdges(piece, 1, limited, limitedBack);
  else if (v < free || (v === free && !isRising)) setEdges(piece, below, limited, free);
  else setEdges(piece, above, free, limitedBack);
}

function setEdges(piece: Piece, slope: number, low: number, high: number): void {
  piece.slope = slope;
  piece.low = low;
  piece.high = high;
  piece.target = piece.net >= 0 ? high : low;
}
