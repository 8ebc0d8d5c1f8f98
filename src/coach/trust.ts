import type { Gains } from '../controller/settings.ts';
import type { GainBounds } from './search.ts';
import type { TrialReading } from './step.ts';

const FIRST_TRUST = 4;
const LEAST_TRUST = 1.5;
const MOST_TRUST = 32;

/**
 * How far the next gains may step from the last, as a factor: what the model has earned. Each trial inside its band
 * doubles it, each outside halves it.
 */
export function trustOf(readings: readonly TrialReading[]): number {
  let trust = FIRST_TRUST;
  for (const reading of readings) {
    if (reading.inBand === true) trust = Math.min(MOST_TRUST, trust * 2);
    if (reading.inBand === false) trust = Math.max(LEAST_TRUST, trust / 2);
  }
  return trust;
}

/**
 * The box around the last gains that trust allows. A term that was off may come on freely, up to what the proportional
 * gain makes sensible: the search's other constraints bound it.
 */
export function trustedBounds(last: Gains | null, trust: number, kdMost: number): GainBounds {
  const free: readonly [number, number] = [0, Number.POSITIVE_INFINITY];
  const around = (value: number): readonly [number, number] =>
    value > 0 ? [value / (4 * trust), value * trust] : free;
  if (last === null) return { kp: free, ki: free, kd: [0, kdMost], zone: free };
  const kd = around(last.kd);
  return {
    kp: around(last.kp),
    ki: around(last.ki),
    kd: [Math.min(kd[0], kdMost), Math.min(kd[1], kdMost)],
    zone: free,
  };
}
