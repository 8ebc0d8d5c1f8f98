import { type Complex, divide, evaluate, magnitude } from './complex.ts';
import type { Margins } from './margins.ts';

/** An open loop as a function of frequency, rad/s. */
export type OpenLoop = (frequency: number) => Complex;

/** Points a decade on the frequency grid; crossings and the peak are refined between them. */
const POINTS_A_DECADE = 60;

/**
 * Gain, phase and delay margin and largest sensitivity of an open loop, by scanning its frequency response and refining each
 * crossing. With several crossovers the smallest margin is given: any of them is enough to lose the loop.
 *
 * @param low, high  rad/s; for a sampled loop `high` is the Nyquist frequency
 */
export function marginsOfLoop(loop: OpenLoop, low: number, high: number): Omit<Margins, 'spectralRadius'> {
  const count = Math.max(40, Math.ceil(POINTS_A_DECADE * Math.log10(high / low)));
  const at = (k: number) => low * (high / low) ** (k / count);
  let gain: number | null = null;
  let phase: number | null = null;
  let delay: number | null = null;
  let peak = 0;
  let peakAt = 0;
  let before = loop(low);
  for (let k = 0; k <= count; k++) {
    const now = k === 0 ? before : loop(at(k));
    const sensitivity = 1 / Math.hypot(1 + now.re, now.im);
    if (sensitivity > peak) {
      peak = sensitivity;
      peakAt = k;
    }
    if (k > 0) {
      if (before.im < 0 !== now.im < 0 && (before.re < 0 || now.re < 0)) {
        const crossing = bisect((w) => loop(w).im, at(k - 1), at(k));
        const reach = -loop(crossing).re;
        if (reach > 0 && reach < 1 && (gain === null || 1 / reach < gain)) gain = 1 / reach;
      }
      if (magnitude(before) > 1 !== magnitude(now) > 1) {
        const crossing = bisect((w) => magnitude(loop(w)) - 1, at(k - 1), at(k));
        const value = loop(crossing);
        const angle = Math.atan2(-value.im, -value.re);
        const degrees = (angle * 180) / Math.PI;
        if (phase === null || Math.abs(degrees) < Math.abs(phase)) phase = degrees;
        const slack = (angle < 0 ? angle + 2 * Math.PI : angle) / crossing;
        if (delay === null || slack < delay) delay = slack;
      }
    }
    before = now;
  }
  // At the very end of the grid a sampled loop is real: crossing −1 there is a margin, too.
  const end = loop(high);
  if (Math.abs(end.im) < 1e-9 * Math.abs(end.re) && end.re < 0 && end.re > -1)
    gain = Math.min(gain ?? Number.POSITIVE_INFINITY, -1 / end.re);
  const peakNear = golden(
    (w) => 1 / magnitude({ re: 1 + loop(w).re, im: loop(w).im }),
    at(Math.max(0, peakAt - 1)),
    at(Math.min(count, peakAt + 1)),
  );
  return { gain, phase, delay, maxSensitivity: Math.max(peak, peakNear) };
}

function bisect(of: (w: number) => number, low: number, high: number): number {
  const sign = of(low) < 0;
  for (let round = 0; round < 60 && high - low > 1e-13 * high; round++) {
    const middle = 0.5 * (low + high);
    if (of(middle) < 0 === sign) low = middle;
    else high = middle;
  }
  return 0.5 * (low + high);
}

/** Largest value between two points, by golden-section search. */
function golden(of: (w: number) => number, low: number, high: number): number {
  const ratio = (Math.sqrt(5) - 1) / 2;
  let a = high - ratio * (high - low);
  let b = low + ratio * (high - low);
  for (let round = 0; round < 45; round++) {
    if (of(a) > of(b)) high = b;
    else low = a;
    a = high - ratio * (high - low);
    b = low + ratio * (high - low);
  }
  return Math.max(of(a), of(b));
}

/** A ratio of polynomials in z on the unit circle, as a function of frequency. */
export function onUnitCircle(numerator: readonly number[], denominator: readonly number[], period: number): OpenLoop {
  return (frequency) => {
    const z = { re: Math.cos(frequency * period), im: Math.sin(frequency * period) };
    return divide(evaluate(numerator, z), evaluate(denominator, z));
  };
}
