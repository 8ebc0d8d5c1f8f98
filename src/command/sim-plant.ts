import type { Profile } from '../mechanism/profile.ts';
import { simulateTrial } from '../trial/simulate.ts';
import type { SimulatedMechanism } from '../trial/trial.ts';
import type { TrialPlant } from './run-trials.ts';

/** A plant that is simulated in process. The same seed and trial number give the same noise, to the bit. */
export function simulatedPlant(mechanism: SimulatedMechanism, profile: Profile, seed: number): TrialPlant {
  return {
    run: async (proposal, trial) => {
      const { gains, move, duration, outputCap } = proposal;
      const { controller, continuous } = profile;
      const request = { controller, gains, move, duration, outputCap, continuous, shape: null };
      return { kind: 'log', samples: simulateTrial(mechanism, request, seed + 1009 * trial) };
    },
  };
}
