import type { PlantModel } from '../../src/plant/response-model.ts';
import type { SimulatedMechanism, TrialRequest } from '../../src/trial/trial.ts';
import { oracleAdvance } from '../plant/oracle.ts';

/**
 * One trial from the text of contracts section 4 and nothing of ours but the records' types: odex moves the plant, the tick below is
 * written from the contract line by line, delays are looked up in a list of what was sent when.
 *
 * @returns measured and output, row by row
 */
export function oracleTrial(
  mechanism: SimulatedMechanism,
  request: TrialRequest,
  times: readonly number[],
): { measured: number[]; output: number[] } {
  const { plant, reading } = mechanism;
  const { controller, gains, move } = request;
  const full = Math.max(Math.abs(controller.output.min), Math.abs(controller.output.max));
  const cap = request.outputCap * full;
  const isSpeed = plant.quantity === 'speed';
  const measured: number[] = [];
  const output: number[] = [];
  let state = isSpeed ? [0, move.from] : [move.from, 0];
  let clock = plant.response.delay;
  let sum = 0;
  let derivative = 0;
  let lastError = 0;
  let lastReading = 0;
  for (let k = 0; k < times.length; k++) {
    const t = times[k] ?? 0;
    const shown = t - reading.delay;
    while (clock < shown) {
      const [inForce, next] = inForceAt(clock, times, output, plant, shown);
      state = oracleAdvance(plant, state, inForce / full, next - clock);
      clock = next;
    }
    let y = (isSpeed ? state[1] : state[0]) ?? 0;
    if (reading.resolution > 0) y = Math.floor(y / reading.resolution + 0.5) * reading.resolution;
    const r = move.to;
    let e = r - y;
    if (request.continuous !== null) {
      while (e > request.continuous / 2) e -= request.continuous;
      while (e < -request.continuous / 2) e += request.continuous;
    }
    if (k > 0) {
      const dt = t - (times[k - 1] ?? 0);
      if (gains.zone === null || Math.abs(e) < gains.zone) sum += e * dt;
      else if (controller.outsideZone === 'reset') sum = 0;
      if (controller.sumLimit !== null) {
        const most = controller.sumLimit / gains.ki;
        sum = Math.min(most, Math.max(-most, sum));
      }
      const d = controller.derivativeOn === 'error' ? (e - lastError) / dt : -(y - lastReading) / dt;
      const filter = controller.derivativeFilter;
      derivative = filter > 0 ? derivative + ((d - derivative) * dt) / (filter + dt) : d;
    }
    let u = gains.kp * e + gains.ki * sum + gains.kd * derivative + gains.hold + gains.pace * (isSpeed ? r : 0);
    if (controller.slew !== null) {
      const most = controller.slew * (k > 0 ? t - (times[k - 1] ?? 0) : controller.period);
      const before = output[k - 1] ?? 0;
      u = Math.min(before + most, Math.max(before - most, u));
    }
    u = Math.min(Math.min(controller.output.max, cap), Math.max(Math.max(controller.output.min, -cap), u));
    lastError = e;
    lastReading = y;
    measured.push(y);
    output.push(u);
  }
  return { measured, output };
}

/** Output that acts just after `clock`, and when that ends (not after `until`). */
function inForceAt(
  clock: number,
  times: readonly number[],
  output: number[],
  plant: PlantModel,
  until: number,
): [number, number] {
  let k = 0;
  while (k + 1 < output.length && (times[k + 1] ?? 0) + plant.response.delay <= clock) k++;
  const next = k + 1 < output.length ? (times[k + 1] ?? 0) + plant.response.delay : until;
  return [output[k] ?? 0, Math.min(next, until)];
}
