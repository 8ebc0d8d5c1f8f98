/** Gains in the canonical convention: parallel, per second, output unit per unit of the measured quantity. */
export interface Gains {
  readonly kp: number;
  readonly ki: number;
  readonly kd: number;
  /** Error, in the profile's unit, inside which the sum accumulates; null = it always does. */
  readonly zone: number | null;
  /** Output added to carry the weight: constant for a lift, times the cosine of measured − levelAngle for an arm. */
  readonly hold: number;
  /** Output per unit/s of setpoint speed (shaped moves of a position loop), or per unit of setpoint (speed loops). */
  readonly pace: number;
}

export type OutputUnit = 'fraction' | 'percent' | 'volts';
export type GainForm = 'parallel' | 'standard' | 'series';
export type TimeBase = 'seconds' | 'ticks';

/** What is known of the code that closes the loop on the robot. Field meanings: contracts, section 1. */
export interface ControllerSettings {
  /** Seconds between ticks. */
  readonly period: number;
  readonly output: { readonly unit: OutputUnit; readonly min: number; readonly max: number };
  readonly timeBase: TimeBase;
  readonly form: GainForm;
  readonly derivativeOn: 'error' | 'measured';
  /** Time constant of a first-order filter on the derivative, s; 0 = none. */
  readonly derivativeFilter: number;
  readonly outsideZone: 'hold' | 'reset';
  /** Largest |integral contribution|, output unit; null = unlimited. */
  readonly sumLimit: number | null;
  /** Largest change of output, output unit per second; null = unlimited. */
  readonly slew: number | null;
}

/** Gains that do nothing: where every run starts. */
export const NO_GAINS: Gains = { kp: 0, ki: 0, kd: 0, zone: null, hold: 0, pace: 0 };

/** Full output in the controller's unit: what a fraction of 1 stands for (the larger of |min| and |max|). */
export function fullOutput(settings: ControllerSettings): number {
  return Math.max(Math.abs(settings.output.min), Math.abs(settings.output.max));
}
