import type { ControllerSettings, Gains } from '../controller/settings.ts';
import type { ResponseModel } from '../plant/response-model.ts';
import { marginsOfLoop, onUnitCircle } from './loop-margins.ts';
import type { Margins } from './margins.ts';
import {
  characteristic,
  inSeries,
  isSchurStable,
  type SampledLoop,
  sampledController,
  sampledPlant,
  spectralRadiusOf,
} from './sampled-loop.ts';

/** A loop to be judged: one response model under gains. */
export interface LoopOf {
  readonly response: ResponseModel;
  readonly quantity: 'position' | 'speed';
  readonly gains: Gains;
  readonly settings: ControllerSettings;
  /** s that the sensor adds to the response's own dead time. */
  readonly sensorDelay: number;
}

/** The sampled open loop, drag and limits off. */
function openLoopOf(loop: LoopOf): SampledLoop {
  const { response, quantity, gains, settings } = loop;
  const plant = sampledPlant(response, quantity, settings.period, response.delay + loop.sensorDelay);
  return inSeries(sampledController(gains, settings), plant);
}

/** Margins of the sampled loop around one response model; design's model, section 6. */
export function marginsOf(loop: LoopOf): Margins {
  const open = openLoopOf(loop);
  const nyquist = Math.PI / open.period;
  const margins = marginsOfLoop(onUnitCircle(open.numerator, open.denominator, open.period), 1e-4 * nyquist, nyquist);
  return { ...margins, spectralRadius: spectralRadiusOf(characteristic(open)) };
}

/** The worst of each margin over several models. */
export function worstMargins(loops: readonly LoopOf[]): Margins | null {
  const least = (a: number | null, b: number | null) => (a === null ? b : b === null ? a : Math.min(a, b));
  return loops.map(marginsOf).reduce<Margins | null>(
    (worst, now) =>
      worst === null
        ? now
        : {
            gain: least(worst.gain, now.gain),
            phase: least(worst.phase, now.phase),
            delay: least(worst.delay, now.delay),
            maxSensitivity: Math.max(worst.maxSensitivity, now.maxSensitivity),
            spectralRadius: Math.max(worst.spectralRadius, now.spectralRadius),
          },
    null,
  );
}

/** Points of the coarse scan: a search needs the peak to a few percent, a thousand times a second. */
const SCAN = 48;

/** Largest sensitivity of the sampled loop to a few percent, infinite when the loop is unstable; the search's cheap check. */
export function maxSensitivityOf(loop: LoopOf): number {
  const open = openLoopOf(loop);
  if (!isSchurStable(characteristic(open))) return Number.POSITIVE_INFINITY;
  const at = onUnitCircle(open.numerator, open.denominator, open.period);
  const nyquist = Math.PI / open.period;
  let peak = 0;
  for (let k = 0; k <= SCAN; k++) {
    const value = at(nyquist * 0.004 ** (1 - k / SCAN));
    peak = Math.max(peak, 1 / Math.hypot(1 + value.re, value.im));
  }
  return peak;
}
