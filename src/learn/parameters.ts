import type { ResponseModel } from '../plant/response-model.ts';
import type { Prior } from './learnt.ts';

/**
 * The coordinates that a prior is told in: every value of them is a valid mechanism, and none has a unit. Logarithms for what is
 * above zero, the breakaway as the logarithm of its excess over drag as a share of drag, the backward drag as the logarithm of its
 * ratio to the forward one, dead time through a soft bend at zero.
 *
 * A fit moves in straightened ones, where drag and excess go through a soft bend, too: outputs, drag and hold add up, and what
 * the records tell of their sum is a straight valley there, but a bent one between logarithms.
 */
export const PARAMETERS = ['topSpeed', 'lag', 'drag', 'excess', 'hold', 'delay', 'oneSided'] as const;
export type FitParameter = (typeof PARAMETERS)[number];

/** Where a parameter stands in the coordinates. */
export function placeOf(name: FitParameter): number {
  return PARAMETERS.indexOf(name);
}

/** σ in ln of the ratio of backward to forward drag before any log. */
const ONE_SIDED_SIGMA = 0.25;

/** Width of a soft bend at zero, as a share of the prior's deviation (dead time) or centre (drag and excess). */
const BEND = 0.3;

/** Widths of the soft bends: the dead time's, s; drag's and its excess', fraction of full output. */
export interface Bends {
  readonly delayBend: number;
  readonly dragBend: number;
}

/** The coordinates of one prior. */
export interface Coordinates extends Bends {
  /** The prior's centre and deviations. A deviation is nil for what is known, such as the hold of what has no weight. */
  readonly centre: Float64Array;
  readonly deviations: Float64Array;
  /** How far the prior lets each straightened coordinate go, roughly. */
  readonly reach: Float64Array;
}

export function coordinatesOf(prior: Prior): Coordinates {
  const { sigma, response } = prior;
  const delayBend = BEND * Math.max(sigma.delay, 1e-6);
  const dragBend = BEND * Math.max(response.drag, LEAST_DRAG);
  const centre = encode(response, delayBend);
  const deviations = [sigma.topSpeed, sigma.lag, sigma.drag, sigma.breakaway, sigma.hold, 1 / BEND, ONE_SIDED_SIGMA];
  const reach = Float64Array.from(deviations);
  const drag = Math.exp(centre[DRAG] ?? 0) / dragBend;
  reach[DRAG] = (sigma.drag ?? 0) / logBendSlope(unbent(drag));
  reach[EXCESS] = (sigma.breakaway ?? 0) / logBendSlope(unbent(drag * Math.exp(centre[EXCESS] ?? 0)));
  return { delayBend, dragBend, centre, deviations: Float64Array.from(deviations), reach };
}

const SPEED = placeOf('topSpeed');
const LAG = placeOf('lag');
const HOLD = placeOf('hold');
const DELAY = placeOf('delay');
const DRAG = placeOf('drag');
const EXCESS = placeOf('excess');

/** Least drag that its logarithm is taken of, fraction of full output; least excess, as a share of drag. */
const LEAST_DRAG = 1e-5;
const LEAST_EXCESS = 1e-3;

/** Most drag and excess and most ratio either way that make sense: beyond, the coordinate is taken as at the bound. */
const MOST_LN_DRAG = 1;
const MOST_LN_EXCESS = 3;
const MOST_LN_ONE_SIDED = 3;

/** A response model in the prior's coordinates. @param delayBend s */
export function encode(response: ResponseModel, delayBend: number): Float64Array {
  const drag = Math.max(response.drag, LEAST_DRAG);
  return Float64Array.of(
    Math.log(response.topSpeed),
    Math.log(response.lag),
    Math.log(drag),
    Math.log(Math.max(response.breakaway / drag - 1, LEAST_EXCESS)),
    response.hold,
    unbent(Math.max(response.delay / delayBend, 1e-3)),
    Math.log(Math.max(response.dragBack, LEAST_DRAG) / drag),
  );
}

/** The prior's coordinates as a response model; breakaway ≥ drag > 0, lag > 0 and delay ≥ 0 whatever they are. */
export function decode(at: Float64Array, delayBend: number): ResponseModel {
  const drag = Math.exp(Math.min(at[2] ?? 0, MOST_LN_DRAG));
  const ratio = 1 + Math.exp(Math.min(at[3] ?? 0, MOST_LN_EXCESS));
  const dragBack = drag * Math.exp(Math.max(-MOST_LN_ONE_SIDED, Math.min(at[6] ?? 0, MOST_LN_ONE_SIDED)));
  return {
    topSpeed: Math.exp(at[0] ?? 0),
    lag: Math.exp(at[1] ?? 0),
    drag,
    dragBack,
    breakaway: drag * ratio,
    breakawayBack: dragBack * ratio,
    hold: at[4] ?? 0,
    delay: delayBend * bent(at[5] ?? 0),
  };
}

/** How the trials went, as far as it says which parameters they tell apart. */
export interface Valley {
  /** Which way the weight counts: 1 with drag (all travel was forward), −1 against it, between them when both; 0 without weight. */
  readonly weight: number;
  /** Usual size of the output while it moved, fraction of full output. */
  readonly output: number;
  /** s between rows. */
  readonly spacing: number;
}

/** The prior's coordinates, straightened. */
export function straightened(at: Float64Array, { dragBend, delayBend }: Bends, valley: Valley): Float64Array {
  const straight = at.slice();
  const drag = Math.exp(at[DRAG] ?? 0);
  const held = valley.weight * (at[HOLD] ?? 0);
  straight[SPEED] = (at[SPEED] ?? 0) - (drag + held) / valley.output;
  straight[DRAG] = unbent(drag / dragBend);
  straight[EXCESS] = unbent((drag / dragBend) * Math.exp(at[EXCESS] ?? 0));
  straight[HOLD] = (at[HOLD] ?? 0) + valley.weight * drag;
  straight[DELAY] = (at[DELAY] ?? 0) + laggedBy(at[LAG] ?? 0, valley) / delayBend;
  return straight;
}

/** Back from {@link straightened}, into `into`. */
export function unstraightened(
  straight: Float64Array,
  { dragBend, delayBend }: Bends,
  valley: Valley,
  into: Float64Array,
): Float64Array {
  into.set(straight);
  const share = bent(straight[DRAG] ?? 0);
  const drag = dragBend * share;
  const hold = (straight[HOLD] ?? 0) - valley.weight * drag;
  into[SPEED] = (straight[SPEED] ?? 0) + (drag + valley.weight * hold) / valley.output;
  into[DRAG] = Math.log(drag);
  into[EXCESS] = Math.log(bent(straight[EXCESS] ?? 0) / share);
  into[HOLD] = hold;
  into[DELAY] = (straight[DELAY] ?? 0) - laggedBy(straight[LAG] ?? 0, valley) / delayBend;
  return into;
}

/** What of a lag looks like dead time, s: all of one much shorter than the rows' spacing, no more than that of a longer one. */
function laggedBy(logLag: number, { spacing }: Valley): number {
  return -spacing * Math.expm1(-Math.exp(logLag) / spacing);
}

/** ln of how much of the prior's coordinates a piece of the straightened ones holds: what their densities differ by. */
export function logStretch(straight: Float64Array): number {
  return Math.log(logBendSlope(straight[DRAG] ?? 0)) + Math.log(logBendSlope(straight[EXCESS] ?? 0));
}

/** Soft bend at zero, ln(1 + e^x): nil far below, x far above. */
function bent(x: number): number {
  return x > 30 ? x : Math.log1p(Math.exp(x));
}

function unbent(value: number): number {
  return value > 30 ? value : Math.log(Math.expm1(Math.max(value, 1e-30)));
}

/** Derivative of the bend's logarithm. */
function logBendSlope(x: number): number {
  return x > 30 ? 1 / x : x < -30 ? 1 : 1 / (1 + Math.exp(-x)) / bent(x);
}
