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
 * place by {@link tick} and {@link resetController}, only; a search ticks it millions of times a second, so nothing is looked up
 * or allocated there.
 */
export interface Controller {
  readonly settings: ControllerSettings;
  readonly resetsOutside: boolean;
  readonly onMeasured: boolean;
  filter: number;
  /** Output unit per second. */
  readonly slew: number;
  /** Half the wrap width; Infinity = the quantity does not wrap. */
  readonly halfTurn: number;
  /** Reading at which the hold term is whole, and radians in a unit from there; 0 rad = a constant hold term. */
  level: number;
  radiansPerUnit: number;
  readonly pacesSetpoint: boolean;
  kp: number;
  ki: number;
  kd: number;
  zone: number;
  /** Largest |sum|. */
  mostSum: number;
  hold: number;
  pace: number;
  /** Whether setpoint, its speed or the reading feed forward to the output: else the hold term is constant and all. */
  isPaced: boolean;
  low: number;
  high: number;
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

/** A controller before its first tick: sum at zero, output at zero. */
export function createController(loop: Loop): Controller {
  const { settings, holdShape } = loop;
  // NaN, not 0: an engine that first sees a whole number in a field plans for whole numbers there.
  const none = Number.NaN;
  const controller: Controller = {
    settings,
    resetsOutside: settings.outsideZone === 'reset',
    onMeasured: settings.derivativeOn === 'measured',
    filter: none,
    slew: settings.slew ?? Number.POSITIVE_INFINITY,
    halfTurn: 0.5 * (loop.continuous ?? Number.POSITIVE_INFINITY),
    level: none,
    radiansPerUnit: none,
    pacesSetpoint: loop.quantity === 'speed',
    kp: none,
    ki: none,
    kd: none,
    zone: none,
    mostSum: none,
    hold: none,
    pace: none,
    isPaced: false,
    low: none,
    high: none,
    time: none,
    error: none,
    measured: none,
    sum: none,
    derivative: none,
    output: none,
    p: none,
    i: none,
    d: none,
  };
  controller.filter = settings.derivativeFilter;
  controller.level = holdShape.kind === 'cosine' ? holdShape.level : 0;
  controller.radiansPerUnit = holdShape.kind === 'cosine' ? holdShape.radiansPerUnit : 0;
  resetController(controller, loop.gains, loop.outputCap);
  return controller;
}

/**
 * Puts a controller back to before its first tick, under other gains.
 *
 * @param outputCap fraction of full output
 */
export function resetController(c: Controller, gains: Gains, outputCap: number): void {
  const { output, sumLimit } = c.settings;
  const cap = outputCap * fullOutput(c.settings);
  c.kp = gains.kp;
  c.ki = gains.ki;
  c.kd = gains.kd;
  c.zone = gains.zone ?? Number.POSITIVE_INFINITY;
  c.mostSum = sumLimit === null ? Number.POSITIVE_INFINITY : sumLimit / Math.abs(gains.ki);
  c.hold = gains.hold;
  c.pace = gains.pace;
  c.isPaced = gains.pace !== 0 || (c.radiansPerUnit !== 0 && gains.hold !== 0);
  c.low = Math.max(output.min, -cap);
  c.high = Math.min(output.max, cap);
  c.time = Number.NaN;
  c.error = 0;
  c.measured = 0;
  c.sum = 0;
  c.derivative = 0;
  c.output = 0;
  c.p = 0;
  c.i = 0;
  c.d = 0;
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
  if (Math.abs(error) > c.halfTurn) error = wrapError(error, 2 * c.halfTurn);
  const dt = time - c.time; // NaN at the first tick, so every comparison with it fails
  if (dt > 0) {
    if (Math.abs(error) < c.zone) c.sum = limitedSum(c, c.sum + error * dt);
    else if (c.resetsOutside) c.sum = 0;
    // 1/dt does not wait for the reading: a processor has it ready when the difference arrives.
    const slope = (c.onMeasured ? c.measured - measured : error - c.error) * (1 / dt);
    c.derivative = c.filter > 0 ? c.derivative + (slope - c.derivative) * (dt / (c.filter + dt)) : slope;
  }
  const p = c.kp * error;
  const i = c.ki * c.sum;
  const d = c.kd * c.derivative;
  let output = p + (i + d) + (c.isPaced ? feedForward(c, setpoint, measured, setpointSpeed) : c.hold);
  if (c.slew < Number.POSITIVE_INFINITY) output = slewed(c, output, dt);
  if (output > c.high) output = c.high;
  else if (output < c.low) output = c.low;

  c.time = time;
  c.error = error;
  c.measured = measured;
  c.p = p;
  c.i = i;
  c.d = d;
  c.output = output;
  return output;
}

function limitedSum(c: Controller, sum: number): number {
  return Math.max(-c.mostSum, Math.min(c.mostSum, sum));
}

function feedForward(c: Controller, setpoint: number, measured: number, setpointSpeed: number): number {
  const hold = c.radiansPerUnit === 0 ? c.hold : c.hold * Math.cos((measured - c.level) * c.radiansPerUnit);
  return hold + c.pace * (c.pacesSetpoint ? setpoint : setpointSpeed);
}

function slewed(c: Controller, output: number, dt: number): number {
  const most = c.slew * (dt >= 0 ? dt : c.settings.period);
  return Math.max(c.output - most, Math.min(c.output + most, output));
}
