import type { Profile } from '../mechanism/profile.ts';
import { HOPELESS, type Verdict } from '../trial/verdict.ts';
import { lastOf, type Situation } from './situation.ts';

/** Why a run ends without a met target, and what a person should do. */
export interface Diagnosis {
  /** Short phrase for lists and files. */
  readonly stopped: string;
  readonly why: string;
}

/** What to look at before any further trial, by verdict. */
const REMEDIES: Readonly<Partial<Record<Verdict['is'], string>>> = {
  reversed:
    'Swap the sign of the output or of the sensor in the robot code (only one of them), then repeat the direction check.',
  deaf: 'Check that the output reaches the motor: enable, wiring, breaker, port, brake, and that nothing blocks the mechanism by hand with power off.',
  frozen: 'Check the sensor: its plug, its port and whether the code reads a fresh value at each tick.',
  jumps:
    'Check the sensor: a slipping coupling, a loose plug, or a reading that wraps. Set `continuous` if it is meant to wrap.',
  'wrong-scale':
    'Correct the conversion of the sensor reading in the robot code, or the reduction and radius in the profile.',
  'hit-a-stop': 'Check the travel limits of the profile and the start position; give the move more room from the stop.',
  'out-of-reach':
    'Relax the target, shorten the move, or change the mechanism: no gains can make the motor faster than full output.',
};

/** A verdict of the last trial that makes tuning pointless; null when tuning may go on. */
export function hopelessVerdict(situation: Situation): Diagnosis | null {
  const last = lastOf(situation);
  if (last === null) return null;
  for (const name of HOPELESS) {
    const verdict = last.reading.verdicts.find((candidate) => candidate.is === name);
    if (verdict) return { stopped: name, why: `${verdict.because} ${REMEDIES[name] ?? ''}`.trim() };
  }
  return null;
}

/** Contradictions in the profile itself that no trial can mend; checked before anything is powered. */
export function hopelessProfile(profile: Profile): Diagnosis | null {
  const { target, limits, sensor, unit } = profile;
  if (target.moves.length === 0) {
    return {
      stopped: 'no moves',
      why: 'The target names no move to prove the gains on. Add at least one to target.moves.',
    };
  }
  if (sensor !== null && sensor.resolution > target.tolerance) {
    return {
      stopped: 'resolution coarser than tolerance',
      why: `One step of the sensor is ${sensor.resolution} ${unit}, more than the tolerance of ${target.tolerance} ${unit}: the loop cannot see whether it is on target. Use a finer sensor, or a tolerance of at least ${sensor.resolution} ${unit}.`,
    };
  }
  if (profile.quantity === 'position') {
    for (const [from, to] of target.moves) {
      const low = Math.min(from, to);
      const high = Math.max(from, to);
      if ((limits.min !== null && low < limits.min) || (limits.max !== null && high > limits.max)) {
        return {
          stopped: 'move outside the limits',
          why: `The move ${from} to ${to} ${unit} leaves the travel limits ${limits.min ?? 'open'} to ${limits.max ?? 'open'} ${unit}. Correct the move or the limits.`,
        };
      }
    }
  }
  return null;
}
