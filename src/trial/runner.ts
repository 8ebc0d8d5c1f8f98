import { type ControllerSettings, fullOutput, type Gains } from '../controller/settings.ts';
import { type Loop, restState, tick } from '../controller/tick.ts';
import type { Move } from '../mechanism/profile.ts';
import { advance, startMotion } from '../plant/motion.ts';
import { countsPerUnit, quantise } from '../plant/quantise.ts';
import type { PlantModel } from '../plant/response-model.ts';
import type { OutputParts } from '../record/samples.ts';
import { normalNumbers } from './chance.ts';
import { planSetpoint, setpointAt, setpointSpeedAt } from './setpoint.ts';
import { tickTimes } from './ticks.ts';
import type { MoveShape, Reading } from './trial.ts';

/** What stays the same from trial to trial of a search. */
export interface TrialSetup {
  readonly controller: ControllerSettings;
  readonly reading: Reading;
  /** s. */
  readonly duration: number;
  readonly continuous: number | null;
  readonly shape: MoveShape | null;
  /** Noise and jitter, the same in every trial of the runner. */
  readonly seed: number;
  /** Ends a trial once the error is this many times its first one; null = never. */
  readonly lostBeyond: number | null;
}

/** The columns that every run writes over, from row 0. */
export interface TrialColumns {
  readonly time: Float64Array;
  readonly setpoint: Float64Array;
  readonly measured: Float64Array;
  readonly output: Float64Array;
  readonly parts: OutputParts;
}

export interface TrialRunner {
  readonly columns: TrialColumns;
  /**
   * Runs one trial into {@link columns}.
   *
   * @param outputCap fraction of full output
   * @returns rows written: all of them unless the trial was lost
   */
  run(plant: PlantModel, gains: Gains, move: Move, outputCap: number): number;
}

/** Prepares for many trials that differ in plant, gains and move only; nothing is allocated a tick. */
export function createTrialRunner(setup: TrialSetup): TrialRunner {
  const { controller, reading } = setup;
  const time = tickTimes(controller.period, setup.duration, reading, setup.seed);
  const rows = time.length;
  const columns: TrialColumns = {
    time,
    setpoint: new Float64Array(rows),
    measured: new Float64Array(rows),
    output: new Float64Array(rows),
    parts: { p: new Float64Array(rows), i: new Float64Array(rows), d: new Float64Array(rows) },
  };
  const noise = reading.noise > 0 ? normalNumbers(setup.seed + 1, rows) : null;
  return {
    columns,
    run: (plant, gains, move, outputCap) => runStepwise(setup, columns, noise, plant, gains, move, outputCap),
  };
}

function runStepwise(
  setup: TrialSetup,
  columns: TrialColumns,
  noise: Float64Array | null,
  plant: PlantModel,
  gains: Gains,
  move: Move,
  outputCap: number,
): number {
  const { controller, reading } = setup;
  const loop: Loop = {
    settings: controller,
    gains,
    quantity: plant.quantity,
    continuous: setup.continuous,
    holdShape: plant.gravity,
    outputCap,
  };
  const state = restState();
  const course = planSetpoint(move, setup.shape);
  const isSpeed = plant.quantity === 'speed';
  const motion = startMotion(plant, isSpeed ? { position: 0, speed: move.from } : { position: move.from, speed: 0 });
  const full = fullOutput(controller);
  const counts = reading.resolution > 0 ? countsPerUnit(reading.resolution) : 0;
  const lost = setup.lostBeyond === null ? Number.POSITIVE_INFINITY : setup.lostBeyond * Math.abs(move.to - move.from);
  const { delay } = plant.response;
  const { time, output } = columns;
  let clock = delay;
  let arrived = 0;
  let truth = move.from;
  let seen = Number.NEGATIVE_INFINITY;
  let reads = 0;
  let measured = 0;
  for (let row = 0; row < time.length; row++) {
    const now = time[row] ?? 0;
    const age = now - reading.delay;
    const until = reading.period > 0 ? Math.floor(age / reading.period + 1e-9) * reading.period : age;
    for (;;) {
      const next = arrived + 1 < row ? (time[arrived + 1] ?? 0) + delay : Number.POSITIVE_INFINITY;
      if (next > until) break;
      if (next > clock) {
        advance(motion, (output[arrived] ?? 0) / full, next - clock);
        clock = next;
      }
      arrived++;
    }
    if (until > clock) {
      advance(motion, (output[arrived] ?? 0) / full, until - clock);
      clock = until;
    }
    if (until > seen || row === 0) {
      seen = until;
      truth = isSpeed ? motion.speed : motion.position;
      measured = noise ? truth + reading.noise * (noise[reads++] ?? 0) : truth;
      if (counts > 0) measured = quantise(measured, counts);
    }
    const setpoint = setpointAt(course, now);
    columns.setpoint[row] = setpoint;
    columns.measured[row] = measured;
    output[row] = tick(loop, state, now, setpoint, measured, setpointSpeedAt(course, now));
    columns.parts.p[row] = state.p;
    columns.parts.i[row] = state.i;
    columns.parts.d[row] = state.d;
    if (Math.abs(setpoint - measured) > lost) return row + 1;
  }
  return time.length;
}
