import { type ControllerSettings, fullOutput, type Gains, NO_GAINS } from '../controller/settings.ts';
import { type Controller, createController, resetController } from '../controller/tick.ts';
import type { Move } from '../mechanism/profile.ts';
import { startMotion } from '../plant/motion.ts';
import { countsPerUnit } from '../plant/quantise.ts';
import type { PlantModel } from '../plant/response-model.ts';
import type { OutputParts } from '../record/samples.ts';
import { normalNumbers } from './chance.ts';
import { planSetpoint, setpointAt, setpointSpeedAt } from './setpoint.ts';
import type { TrialStand } from './stand.ts';
import { runStepwise } from './stepwise-trial.ts';
import { type SwiftPlant, swiftPlantOf } from './swift-plant.ts';
import { newRun } from './swift-run.ts';
import { isSwift, runSwift } from './swift-trial.ts';
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
  /** Noise and jitter: the same numbers in every trial of the runner. */
  readonly seed: number;
  /** Ends a trial once the error is this many times the move; null = never. */
  readonly lostBeyond: number | null;
  /** Whether the P, I and D parts are kept, too; a search leaves them out. */
  readonly parts?: 'kept' | 'left out' | undefined;
}

/** The columns that every run writes over, from row 0; units as in Samples. */
export interface TrialColumns {
  readonly time: Float64Array;
  readonly setpoint: Float64Array;
  readonly measured: Float64Array;
  readonly output: Float64Array;
  readonly parts: OutputParts | null;
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

/**
 * Prepares for many trials that differ in plant, gains, move and cap only. Nothing is allocated a tick, and a plant that comes back
 * is laid out once. The trial is that of {@link simulateTrial}, to rounding.
 */
export function createTrialRunner(setup: TrialSetup): TrialRunner {
  const stand = standOf(setup);
  const swiftRun = newRun();
  const known = new WeakMap<PlantModel, LaidOut>();
  const run = (plant: PlantModel, gains: Gains, move: Move, outputCap: number): number => {
    let laidOut = known.get(plant);
    if (laidOut === undefined) {
      laidOut = layOut(plant, setup);
      known.set(plant, laidOut);
    }
    const { controller, swift } = laidOut;
    fillSetpoint(stand, setup.shape, move);
    resetController(controller, gains, outputCap);
    const lost =
      setup.lostBeyond === null ? Number.POSITIVE_INFINITY : setup.lostBeyond * Math.abs(move.to - move.from);
    if (swift === null || setup.shape !== null || !isSwift(controller, stand)) {
      return runStepwise(stand, controller, startMotion(plant, startOf(plant, move)), plant, lost);
    }
    swift.motion.position = swift.isSpeed > 0 ? 0 : move.from;
    swift.motion.speed = swift.isSpeed > 0 ? move.from : 0;
    return runSwift(stand, controller, swift, swiftRun, lost);
  };
  return { columns: stand, run };
}

/** A plant and the controller that runs it, ready for trial after trial. */
interface LaidOut {
  readonly controller: Controller;
  /** Null when the plant or its reading needs the general loop. */
  readonly swift: SwiftPlant | null;
}

function standOf(setup: TrialSetup): TrialStand {
  const { controller, reading } = setup;
  const time = tickTimes(controller.period, setup.duration, reading, setup.seed);
  const rows = time.length;
  const column = () => new Float64Array(rows);
  return {
    time,
    setpoint: column(),
    setpointSpeed: column(),
    measured: column(),
    output: column(),
    parts: setup.parts === 'kept' ? { p: column(), i: column(), d: column() } : null,
    period: controller.period,
    perUnit: 1 / fullOutput(controller),
    reading,
    noise: reading.noise > 0 ? normalNumbers(setup.seed + 1, rows).map((sigmas) => sigmas * reading.noise) : null,
    counts: reading.resolution > 0 ? countsPerUnit(reading.resolution) : 0,
  };
}

function layOut(plant: PlantModel, setup: TrialSetup): LaidOut {
  const { reading } = setup;
  const controller = createController({
    settings: setup.controller,
    gains: NO_GAINS,
    quantity: plant.quantity,
    continuous: setup.continuous,
    holdShape: plant.gravity,
    outputCap: 1,
  });
  const motion = startMotion(plant, { position: 0, speed: 0 });
  if (motion.solver !== 'exact' || reading.jitter > 0 || reading.period > 0) return { controller, swift: null };
  const delay = plant.response.delay + reading.delay;
  const isSpeed = plant.quantity === 'speed';
  const { period } = setup.controller;
  const perUnit = 1 / fullOutput(setup.controller);
  return { controller, swift: swiftPlantOf(motion.state, isSpeed, delay, period, perUnit) };
}

/** At rest where the move starts; a speed loop runs there, an arm under one from level. */
function startOf(plant: PlantModel, move: Move): { position: number; speed: number } {
  if (plant.quantity === 'position') return { position: move.from, speed: 0 };
  return { position: plant.gravity.kind === 'cosine' ? plant.gravity.level : 0, speed: move.from };
}

function fillSetpoint(stand: TrialStand, shape: MoveShape | null, move: Move): void {
  const { time, setpoint, setpointSpeed } = stand;
  if (shape === null) {
    if (setpoint[0] !== move.to) setpoint.fill(move.to);
    return;
  }
  const course = planSetpoint(move, shape);
  for (let row = 0; row < time.length; row++) {
    setpoint[row] = setpointAt(course, time[row] ?? 0);
    setpointSpeed[row] = setpointSpeedAt(course, time[row] ?? 0);
  }
}
