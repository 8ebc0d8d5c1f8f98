import { createController, type Loop, tick } from './tick.ts';

/** The output and its parts that a controller must have sent, in the controller's output unit. */
export interface RebuiltOutput {
  readonly output: Float64Array;
  readonly parts: { readonly p: Float64Array; readonly i: Float64Array; readonly d: Float64Array };
}

/**
 * Rebuilds the output of a trial whose log has none, by running the controller's tick over the logged columns. It is what was sent
 * as far as the rows are the controller's own ticks, the readings those that it saw, and it started with its sum at zero.
 *
 * @param setpointSpeed unit/s, row by row, for a shaped move; null for a step of the setpoint
 */
export function rebuildOutput(
  loop: Loop,
  time: Float64Array,
  setpoint: Float64Array,
  measured: Float64Array,
  setpointSpeed: Float64Array | null = null,
): RebuiltOutput {
  const rows = time.length;
  const output = new Float64Array(rows);
  const parts = { p: new Float64Array(rows), i: new Float64Array(rows), d: new Float64Array(rows) };
  const controller = createController(loop);
  for (let row = 0; row < rows; row++) {
    const speed = setpointSpeed?.[row] ?? 0;
    output[row] = tick(controller, time[row] ?? 0, setpoint[row] ?? 0, measured[row] ?? 0, speed);
    parts.p[row] = controller.p;
    parts.i[row] = controller.i;
    parts.d[row] = controller.d;
  }
  return { output, parts };
}
