import { type ControllerSettings, fullOutput, type Gains } from './settings.ts';

/** How the hold term varies: constant (a lift, or nothing to hold) or with the cosine of the reading (an arm). */
export type HoldShape =
  | { readonly kind: 'none' }
  | { readonly kind: 'constant' }
  | { readonly kind: 'cosine'; readonly level: number; readonly radiansPerUnit: number };

/** All that a controller's tick depends on and that stays fixed during a trial. */
export interface Loop {
  readonly settings: ControllerSettings;
  readonly gains: Gains;
  readonly quantity: 'position' | 'speed';
  /** Wrap width of the measured quantity, or null. */
  readonly continuous: number | null;
  readonly holdShape: HoldShape;
  /** Largest output, fraction of full output. */
  readonly outputCap: number;
}

/**
 * A controller between two ticks: its law laid flat (a bound that does not exist is Infinity), and what it remembers. Changed in
 * place by {@link tick}, only; a search ticks it millions of times a second, so nothing is looked up or allocated there.
 */
export interface Controller {
  readonly kp: number;
  readonly ki: number;
  readonly kd: number;
  readonly zone: number;
  readonly resetsOutside: boolean;
  /** Largest |sum|. */
  readonly mostSum: number;
  readonly onMeasured: boolean;
  readonly filter: number;
  readonly hold: number;
  /** Reading at which the hold term is whole, and radians in a unit from there; 0 rad = a constant hold term. */
  readonly level: number;
  readonly radiansPerUnit: number;
  readonly pace: number;
  readonly pacesSetpoint: boolean;
  /** Output unit per second. */
  readonly slew: number;
  readonly low: number;
  readonly high: number;
  /** Infinity = the quantity does not wrap. */
  readonly wrap: number;
  readonly period: number;
  /** s; NaN before the first tick. */
  time: number;
  error: number;
  measured: number;
  /** Sum of error × time. */
  sum: number;
  /** Filtered derivative. */
  derivative: number;
  /** As last sent, output unit. */
  output: number;
  /** What the three terms last added, output unit. */
  p: number;
  i: number;
  d: number;
}

/** Error wrapped to ± half the wrap width; exactly half a turn stays as it is. */
export function wrapError(error: number, continuous: number | null): number {
  if (continuous === null || Math.abs(error) <= continuous / 2) return error;
  return error - continuous * Math.round(error / continuous);
}

/** Lowest and highest output that may be sent, output unit: the controller's own range inside ± the cap. */
export function outputRange(settings: ControllerSettings, outputCap: number): readonly [low: number, high: number] {
  const cap = outputCap * fullOutput(settings);
  return [Math.max(settings.output.min, -cap), Math.min(settings.output.max, cap)];
}

/** A controller before its first tick: sum at zero, output at zero. */
export function createController(loop: Loop): Controller {
  const { settings, gains, holdShape } = loop;
  const [low, high] = outputRange(settings, loop.outputCap);
  return {
    kp: gains.kp,
    ki: gains.ki,
    kd: gains.kd,
    zone: gains.zone ?? Number.POSITIVE_INFINITY,
    resetsOutside: settings.outsideZone === 'reset',
    mostSum: settings.sumLimit === null ? Number.POSITIVE_INFINITY : settings.sumLimit / Math.abs(gains.ki),
    onMeasured: settings.derivativeOn === 'measured',
    filter: settings.derivativeFilter,
    hold: gains.hold,
    level: holdShape.kind === 'cosine' ? holdShape.level : 0,
    radiansPerUnit: holdShape.kind === 'cosine' ? holdShape.radiansPerUnit : 0,
    pace: gains.pace,
    pacesSetpoint: loop.quantity === 'speed',
    slew: settings.slew ?? Number.POSITIVE_INFINITY,
    low,
    high,
    wrap: loop.continuous ?? Number.POSITIVE_INFINITY,
    period: settings.period,
    time: Number.NaN,
    error: 0,
    measured: 0,
    sum: 0,
    derivative: 0,
    output: 0,
    p: 0,
    i: 0,
    d: 0,
  };
}

/**
 * One tick of the controller, to the letter of contracts, section 4. The first tick neither sums nor differentiates; its slew is
 * limited from zero over one nominal period. A tick whose time does not increase keeps sum and derivative.
 *
 * @param time s
 * @param setpoint profile unit
 * @param measured the sensor's last reading, profile unit
 * @param setpointSpeed unit/s of a shaped move, 0 for a step; a speed loop's pace acts on the setpoint itself instead
 * @returns output, output unit, held until the next tick
 */
export function tick(c: Controller, time: number, setpoint: number, measured: number, setpointSpeed: number): number {
  let error = setpoint - measured;
  if (Math.abs(error) > 0.5 * c.wrap) error -= c.wrap * Math.round(error / c.wrap);
  const dt = time - c.time; // NaN at the first tick, so every comparison with it fails

  if (dt > 0) {
    const outside = Math.abs(error) >= c.zone;
    let sum = outside ? (c.resetsOutside ? 0 : c.sum) : c.sum + error * dt;
    if (Math.abs(sum) > c.mostSum) sum = sum > 0 ? c.mostSum : -c.mostSum;
    c.sum = sum;
    // 1/dt does not wait for the reading: a processor has it ready when the difference arrives.
    const slope = (c.onMeasured ? c.measured - measured : error - c.error) * (1 / dt);
    c.derivative = c.filter > 0 ? c.derivative + (slope - c.derivative) * (dt / (c.filter + dt)) : slope;
  }
  c.p = c.kp * error;
  c.i = c.ki * c.sum;
  c.d = c.kd * c.derivative;
  let output = c.p + (c.i + c.d) + c.pace * (c.pacesSetpoint ? setpoint : setpointSpeed);
  output += c.radiansPerUnit === 0 ? c.hold : c.hold * Math.cos((measured - c.level) * c.radiansPerUnit);
  if (c.slew < Number.POSITIVE_INFINITY) output = slewed(c, output, dt >= 0 ? dt : c.period);
  if (output > c.high) output = c.high;
  else if (output < c.low) output = c.low;

  c.time = time;
  c.error = error;
  c.measured = measured;
  c.output = output;
  return output;
}

function slewed(c: Controller, output: number, dt: number): number {
  const most = c.slew * dt;
  return Math.max(c.output - most, Math.min(c.output + most, output));
}
