import type { OutputParts } from '../record/samples.ts';
import type { Reading } from './trial.ts';

/** What the loops of a trial need that stays the same from trial to trial, and the columns they write over. */
export interface TrialStand {
  readonly time: Float64Array;
  readonly setpoint: Float64Array;
  /** unit/s; zeros for a step. */
  readonly setpointSpeed: Float64Array;
  readonly measured: Float64Array;
  readonly output: Float64Array;
  readonly parts: OutputParts | null;
  /** Seconds between even ticks. */
  readonly period: number;
  /** Fractions of full output in one output unit. */
  readonly perUnit: number;
  readonly reading: Reading;
  /** Noise of each reading, profile unit; null = none. */
  readonly noise: Float64Array | null;
  /** Counts of the sensor in one profile unit; 0 = continuous. */
  readonly counts: number;
}
