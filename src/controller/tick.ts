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

/** What a controller remembers from tick to tick, and what its terms last gave; changed in place by {@link tick}. */
export interface TickState {
  /** s; NaN before the first tick. */
  time: number;
  error: number;
  measured: number;
  /** Sum of error × time. */
  sum: number;
  /** Filtered derivative. */
  derivative: number;
  /** Output unit, as sent. */
  output: number;
  p: number;
  i: number;
  d: number;
}

/** A controller before its first tick: sum at zero, output at zero. */
export function restState(): TickState {
  return { time: Number.NaN, error: 0, measured: 0, sum: 0, derivative: 0, output: 0, p: 0, i: 0, d: 0 };
}

/** Error wrapped to ± half the wrap width; exactly half a turn stays as it is. */
export function wrapError(error: number, continuous: number | null): number {
  if (continuous === null || Math.abs(error) <= continuous / 2) return error;
  return error - continuous * Math.round(error / continuous);
}

/** The output the hold term adds at reading `measured`, output unit. */
export function holdTerm(hold: number, shape: HoldShape, measured: number): number {
  return shape.kind === 'cosine' ? hold * Math.cos((measured - shape.level) * shape.radiansPerUnit) : hold;
}

/** Lowest and highest output that may be sent, output unit: the controller's own range inside ± the cap. */
export function outputRange(settings: ControllerSettings, outputCap: number): readonly [low: number, high: number] {
  const cap = outputCap * fullOutput(settings);
  return [Math.max(settings.output.min, -cap), Math.min(settings.output.max, cap)];
}

/**
 * One tick of the controller, to the letter of contracts, section 4. The first tick neither sums nor differentiates; its slew is
 * limited from zero over one nominal period. A tick whose time does not increase keeps sum and derivative.
 *
 * @param time s
 * @param setpoint profile unit
 * @param measured the sensor's last reading, profile unit
 * @param setpointSpeed unit/s of a shaped move, 0 for a step; a speed loop's pace acts on the setpoint itself instead
 * @returns output, output unit, held until the next tick; `state` also keeps the terms' parts
 */
export function tick(
  loop: Loop,
  state: TickState,
  time: number,
  setpoint: number,
  measured: number,
  setpointSpeed: number,
): number {
  const { settings, gains } = loop;
  const error = wrapError(setpoint - measured, loop.continuous);
  const isFirst = Number.isNaN(state.time);
  const dt = isFirst ? 0 : time - state.time;

  if (gains.zone === null || Math.abs(error) < gains.zone) state.sum += error * dt;
  else if (settings.outsideZone === 'reset') state.sum = 0;
  if (settings.sumLimit !== null) {
    const most = settings.sumLimit / Math.abs(gains.ki);
    if (state.sum > most) state.sum = most;
    else if (state.sum < -most) state.sum = -most;
  }
  if (dt > 0) {
    const slope = settings.derivativeOn === 'error' ? (error - state.error) / dt : (state.measured - measured) / dt;
    const filter = settings.derivativeFilter;
    state.derivative = filter > 0 ? state.derivative + ((slope - state.derivative) * dt) / (filter + dt) : slope;
  }

  state.p = gains.kp * error;
  state.i = gains.ki * state.sum;
  state.d = gains.kd * state.derivative;
  const pace = gains.pace * (loop.quantity === 'speed' ? setpoint : setpointSpeed);
  let output = state.p + state.i + state.d + holdTerm(gains.hold, loop.holdShape, measured) + pace;
  if (settings.slew !== null) {
    const most = settings.slew * (isFirst ? settings.period : dt);
    output = Math.max(state.output - most, Math.min(state.output + most, output));
  }
  const [low, high] = outputRange(settings, loop.outputCap);
  output = Math.max(low, Math.min(high, output));

  state.time = time;
  state.error = error;
  state.measured = measured;
  state.output = output;
  return output;
}
