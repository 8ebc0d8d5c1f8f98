import type { Command } from 'commander';
import { conventionOf, type EnteredGains, fromConvention, NoEquivalent, toConvention } from '../controller/forms.ts';
import { fullOutput, type Gains, NO_GAINS } from '../controller/settings.ts';
import type { Profile } from '../mechanism/profile.ts';
import { wrongUse } from './failure.ts';
import { decimal } from './numbers.ts';

/** Gains typed on the command line, as the profile's controller writes them. */
export interface TypedGains {
  readonly kp?: number;
  readonly ki?: number;
  readonly kd?: number;
  readonly ti?: number;
  readonly td?: number;
  readonly zone?: number;
  readonly hold?: number;
  readonly pace?: number;
}

/** Lays the options on a command that takes gains. */
export function addGainOptions(command: Command): Command {
  return command
    .option('--kp <n>', 'Kp (the one gain of the standard and series forms)', decimal)
    .option('--ki <n>', 'Ki, parallel form', decimal)
    .option('--kd <n>', 'Kd, parallel form', decimal)
    .option('--ti <n>', 'integral time, standard and series forms', decimal)
    .option('--td <n>', 'derivative time, standard and series forms', decimal)
    .option('--zone <n>', 'error inside which the sum accumulates', decimal)
    .option('--hold <n>', 'output that carries the weight', decimal)
    .option('--pace <n>', 'output per unit of setpoint speed', decimal);
}

/**
 * The profile's gains with those that were typed put in their place, canonical again: what is typed is in the profile's own
 * form, time base and output unit.
 *
 * @throws {Failure} for a term that the profile's form does not have, and when there is no gain at all
 */
export function gainsTyped(typed: TypedGains, profile: Profile): Gains {
  const convention = conventionOf(profile.controller);
  const full = fullOutput(profile.controller);
  const before = enteredOrNone(profile, full);
  const { zone = before.zone, hold = before.hold, pace = before.pace } = typed;
  const rest = { zone, hold, pace };
  const entered: EnteredGains =
    before.form === 'parallel'
      ? { form: 'parallel', ...parallelTerms(typed, before), ...rest }
      : { form: before.form, ...timedTerms(typed, before), ...rest };
  const gains = fromConvention(entered, full, convention);
  if (gains.kp === 0 && gains.ki === 0 && gains.kd === 0 && gains.pace === 0) {
    throw wrongUse(
      `The profile "${profile.name}" has no gains yet.`,
      'Give them with --kp and the others, or tune it first.',
    );
  }
  return gains;
}

function enteredOrNone(profile: Profile, full: number): EnteredGains {
  const convention = conventionOf(profile.controller);
  try {
    return toConvention(profile.gains, full, convention);
  } catch (error) {
    if (error instanceof NoEquivalent) return toConvention(NO_GAINS, full, convention);
    throw error;
  }
}

function parallelTerms(typed: TypedGains, before: EnteredGains & { readonly form: 'parallel' }) {
  if (typed.ti !== undefined || typed.td !== undefined) {
    throw wrongUse('The parallel form of this profile has no --ti and --td.', 'Give --ki and --kd.');
  }
  const { kp = before.kp, ki = before.ki, kd = before.kd } = typed;
  return { kp, ki, kd };
}

function timedTerms(typed: TypedGains, before: EnteredGains & { readonly form: 'standard' | 'series' }) {
  if (typed.ki !== undefined || typed.kd !== undefined) {
    throw wrongUse(`The ${before.form} form of this profile has no --ki and --kd.`, 'Give --ti and --td.');
  }
  const {
    kp: gain = before.gain,
    ti: integralTime = before.integralTime,
    td: derivativeTime = before.derivativeTime,
  } = typed;
  return { gain, integralTime, derivativeTime };
}
