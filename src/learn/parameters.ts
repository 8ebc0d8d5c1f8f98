import type { ResponseModel } from '../plant/response-model.ts';
import type { Prior } from './learnt.ts';

/**
 * The coordinates that a fit moves in: every value of them is a valid mechanism. Logarithms for what is above zero, the
 * breakaway as the logarithm of its excess over drag, the backward drag as the logarithm of its ratio to the forward one,
 * dead time through a soft bend at zero.
 */
export const PARAMETERS = ['topSpeed', 'lag', 'drag', 'excess', 'hold', 'delay', 'oneSided'] as const;
export type FitParameter = (typeof PARAMETERS)[number];

/** Least drag and excess that the logarithm can hold, fraction of full output. */
const LEAST = 1e-5;

/** σ in ln of the ratio of backward to forward drag before any log. */
const ONE_SIDED_SIGMA = 0.2;

/** Width of the soft bend of the dead time at zero, as a share of its prior deviation. */
const BEND = 0.3;

/** A response model as coordinates. @param delayScale s, the prior's deviation of the delay */
export function encode(response: ResponseModel, delayScale: number): Float64Array {
  const width = BEND * delayScale;
  const drag = Math.max(response.drag, LEAST);
  const delay = Math.max(response.delay, 1e-3 * width);
  return Float64Array.of(
    Math.log(response.topSpeed),
    Math.log(response.lag),
    Math.log(drag),
    Math.log(Math.max(response.breakaway / drag - 1, 1e-3)),
    response.hold,
    delay / width > 30 ? delay : width * Math.log(Math.expm1(delay / width)),
    Math.log(Math.max(response.dragBack, LEAST) / drag),
  );
}

/** Coordinates as a response model; breakaway ≥ drag > 0, lag > 0 and delay ≥ 0 whatever they are. */
export function decode(at: Float64Array, delayScale: number): ResponseModel {
  const width = BEND * delayScale;
  const drag = Math.exp(Math.min(at[2] ?? 0, 2));
  const ratio = 1 + Math.exp(Math.min(at[3] ?? 0, 3));
  const dragBack = drag * Math.exp(Math.max(-3, Math.min(at[6] ?? 0, 3)));
  const bent = (at[5] ?? 0) / width;
  return {
    topSpeed: Math.exp(at[0] ?? 0),
    lag: Math.exp(at[1] ?? 0),
    drag,
    dragBack,
    breakaway: drag * ratio,
    breakawayBack: dragBack * ratio,
    hold: at[4] ?? 0,
    delay: bent > 30 ? (at[5] ?? 0) : width * Math.log1p(Math.exp(bent)),
  };
}

/** Prior standard deviations in the coordinates' order. A hold that is known to be nil keeps a deviation of nil. */
export function priorDeviations(prior: Prior): readonly number[] {
  const { sigma } = prior;
  return [sigma.topSpeed, sigma.lag, sigma.drag, sigma.breakaway, sigma.hold, sigma.delay, ONE_SIDED_SIGMA];
}
