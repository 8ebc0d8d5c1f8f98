import { DURATION, SETTINGS, type SolverCase } from './cases.ts';

/** Moves a plant's position and speed by one tick under an output. */
export type AdvanceTick = (example: SolverCase, state: [number, number], u: number) => void;

/** The benchmark's loop around another solver: the same PID with a zone, continuous readings, plain and without calls into ours. */
export function runWith(example: SolverCase, advance: AdvanceTick): Float64Array {
  const { gains, move } = example;
  const { period } = SETTINGS;
  const rows = Math.round(DURATION / period) + 1;
  const measured = new Float64Array(rows);
  const zone = gains.zone ?? Number.POSITIVE_INFINITY;
  const state: [number, number] = [move.from, 0];
  let sum = 0;
  let last = 0;
  let u = 0;
  for (let row = 0; row < rows; row++) {
    if (row > 0) advance(example, state, u);
    const error = move.to - state[0];
    if (row > 0 && Math.abs(error) < zone) sum += error * period;
    const slope = row > 0 ? (error - last) / period : 0;
    last = error;
    u = Math.max(-1, Math.min(1, gains.kp * error + gains.ki * sum + gains.kd * slope));
    measured[row] = state[0];
  }
  return measured;
}

/**
 * The same trial by classical Runge–Kutta in 1 ms steps, written for speed: plain numbers, nothing allocated or called. Friction by the
 * sign of the speed; stuck when a step would turn the speed round or the push is within breakaway.
 */
export function runRungeKutta(example: SolverCase, measured: Float64Array): void {
  const { gains, move, plant } = example;
  const { topSpeed, lag, drag, breakaway } = plant.response;
  const { kp, ki, kd } = gains;
  const { to } = move;
  const { period } = SETTINGS;
  const zone = gains.zone ?? Number.POSITIVE_INFINITY;
  const step = 0.001;
  const steps = Math.round(period / step);
  const rate = 1 / lag;
  let x = move.from;
  let v = 0;
  let sum = 0;
  let last = 0;
  let u = 0;
  for (let row = 0; row < measured.length; row++) {
    if (row > 0) {
      for (let n = 0; n < steps; n++) {
        if (v === 0 && u <= breakaway && u >= -breakaway) break;
        const way = v > 0 || (v === 0 && u > 0) ? 1 : -1;
        const end = topSpeed * (u - drag * way);
        const k1 = (end - v) * rate;
        const k2 = (end - (v + 0.5 * step * k1)) * rate;
        const k3 = (end - (v + 0.5 * step * k2)) * rate;
        const k4 = (end - (v + step * k3)) * rate;
        const next = v + (step / 6) * (k1 + 2 * k2 + 2 * k3 + k4);
        x += step * v + ((step * step) / 6) * (k1 + k2 + k3);
        v = next * way < 0 ? 0 : next;
      }
    }
    const error = to - x;
    if (row > 0 && Math.abs(error) < zone) sum += error * period;
    const slope = row > 0 ? (error - last) / period : 0;
    last = error;
    u = kp * error + ki * sum + kd * slope;
    if (u > 1) u = 1;
    else if (u < -1) u = -1;
    measured[row] = x;
  }
}
