import { plantModelOf } from '../mechanism/plant-of.ts';
import type { Profile } from '../mechanism/profile.ts';
import type { PlantModel } from '../plant/response-model.ts';
import { type Samples, sliceSamples } from '../record/samples.ts';
import { createTrialRunner } from './runner.ts';
import type { Reading, SimulatedMechanism, TrialRequest } from './trial.ts';

/**
 * One trial on a simulated mechanism. Time 0 is the setpoint's step; the mechanism starts at rest at move.from (a speed loop: in
 * steady running there), held there until the first output arrives, and the controller starts with its sum at zero.
 *
 * @param seed noise and jitter; the same seed gives the same trial to the bit
 * @returns rows 0, period, … duration, with output and parts filled; supply, current and enabled are null
 */
export function simulateTrial(mechanism: SimulatedMechanism, request: TrialRequest, seed: number): Samples {
  const { controller, duration, continuous, shape } = request;
  const runner = createTrialRunner({
    controller,
    reading: mechanism.reading,
    duration,
    continuous,
    shape,
    seed,
    lostBeyond: null,
    parts: 'kept',
  });
  const rows = runner.run(mechanism.plant, request.gains, request.move, request.outputCap);
  const { time, setpoint, measured, output, parts } = runner.columns;
  return sliceSamples({ time, setpoint, measured, output, supply: null, current: null, enabled: null, parts }, 0, rows);
}

/** How a profile's sensor sees the motion; a perfect one when nothing is known of it. Read at each tick, even ticks. */
export function readingOf(profile: Profile): Reading {
  const { resolution, noise, delay } = profile.sensor ?? { resolution: 0, noise: 0, delay: 0 };
  return { resolution, noise, delay, period: 0, jitter: 0 };
}

/** A profile's mechanism by its nameplate, ready for trials; null where the machine's numbers are missing. */
export function simulatedMechanismOf(profile: Profile): SimulatedMechanism | null {
  const plant: PlantModel | null = plantModelOf(profile);
  return plant && { plant, reading: readingOf(profile) };
}
