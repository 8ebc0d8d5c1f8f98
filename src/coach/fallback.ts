import { fullOutput, type Gains } from '../controller/settings.ts';
import type { Profile } from '../mechanism/profile.ts';
import type { VerdictName } from '../trial/verdict.ts';
import { kdLimit } from './scales.ts';
import type { TrialReading, TrialRecord } from './step.ts';

/** Next gains by the measured response alone, with the rule that chose them. */
export interface MeasuredStep {
  readonly gains: Gains;
  readonly because: string;
}

/**
 * The next gains when the model explains the logs too badly to be searched: one change for the worst thing seen, by a
 * factor of two at most; design's coach, Trust. Common practice, no source, but for the first Ki: output/(error·seconds).
 */
export function measuredStep(profile: Profile, trial: TrialRecord, reading: TrialReading): MeasuredStep {
  const { gains } = trial;
  const seen = new Set<VerdictName>(reading.verdicts.map((verdict) => verdict.is));
  const any = (...names: readonly VerdictName[]) => names.some((name) => seen.has(name));
  const full = fullOutput(profile.controller);
  if (any('growing-swing')) {
    return {
      gains: { ...gains, kp: gains.kp / 2, ki: gains.ki / 4 },
      because: 'It swung wider and wider: Kp is halved, Ki quartered.',
    };
  }
  if (any('hunting')) {
    const zone = gains.zone === null ? 2 * profile.target.tolerance : gains.zone / 1.4;
    return {
      gains: { ...gains, ki: gains.ki / 2, zone },
      because: 'It hunts: Ki is halved and the zone made smaller.',
    };
  }
  if (any('chatters') && gains.kd > 0) {
    return { gains: { ...gains, kd: gains.kd / 2 }, because: 'The output chatters: Kd is halved.' };
  }
  if (any('steady-swing', 'swings', 'overshoots')) {
    const period = reading.figures.swingPeriod ?? 4 * profile.controller.period;
    const kd = Math.min(kdLimit(profile), gains.kd > 0 ? gains.kd * 1.5 : (gains.kp * period) / 16);
    const kp = any('steady-swing') ? gains.kp / 1.5 : gains.kp;
    return { gains: { ...gains, kp, kd }, because: 'It runs past the target: more Kd to brake it earlier.' };
  }
  if (any('stuck-short')) {
    const rest = Math.abs(reading.figures.restingError ?? profile.target.tolerance);
    if (gains.ki === 0) {
      const ki = (0.1 * full) / (Math.max(rest, profile.target.tolerance) * profile.target.settlingTime);
      return {
        gains: { ...gains, ki, zone: 1.5 * Math.max(rest, profile.target.tolerance) },
        because:
          'It rests short: Ki is set to add a tenth of full output within the target time, in a zone half as wide again as the rest.',
      };
    }
    return { gains: { ...gains, ki: gains.ki * 1.6 }, because: 'It still rests short: Ki is raised by 1.6.' };
  }
  return { gains: { ...gains, kp: gains.kp * 1.6 }, because: 'It is steady but slow: Kp is raised by 1.6.' };
}
