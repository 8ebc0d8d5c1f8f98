import { fullOutput, type Gains } from '../../controller/settings.ts';
import type { Move, Profile } from '../../mechanism/profile.ts';
import { formatNumber, formatQuantity } from '../../mechanism/quantity.ts';
import type { ResponseModel } from '../../plant/response-model.ts';
import type { Samples } from '../../record/samples.ts';
import type { Course } from '../course.ts';
import type { Figures } from '../figures.ts';
import type { Verdict, VerdictName } from '../verdict.ts';

/** Everything that the rules for verdicts may look at. */
export interface Look {
  readonly samples: Samples;
  readonly course: Course;
  readonly figures: Figures;
  readonly profile: Profile;
  readonly gains: Gains | null;
  readonly move: Move;
  /** Fraction of full output. */
  readonly outputCap: number;
  /** Learnt; null while nothing usable was. */
  readonly response: ResponseModel | null;
  /** The most that the machine may be able to, within what is learnt; null while nothing usable was. */
  readonly reach: ResponseModel | null;
  readonly nameplate: ResponseModel | null;
  /** How the trial kept its promise; null when none was made. */
  readonly promise: { readonly inside: boolean; readonly share: number; readonly first: number | null } | null;
}

/** A rule: null when it does not fire. */
export type Rule = (look: Look) => Verdict | null;

export function verdict(
  is: VerdictName,
  because: string,
  rule: string,
  numbers: Readonly<Record<string, number>>,
  samples: Verdict['samples'] = null,
): Verdict {
  return { is, because, rule, numbers, samples };
}

/** An amount in this mechanism's unit, in words. */
export const amount = (look: Look, value: number): string =>
  formatQuantity(value, look.profile.unit, look.profile.sensor?.resolution ?? 0);

export const seconds = (value: number): string =>
  value < 0.1 ? `${formatNumber(1000 * value, 2)} ms` : `${formatNumber(value, 2)} s`;

/** An output in the controller's unit, in words. */
export function output(look: Look, value: number): string {
  const { unit } = look.profile.controller.output;
  return `${formatNumber(value, 2)}${unit === 'percent' ? ' %' : unit === 'volts' ? ' V' : ''} output`;
}

/** Output as a fraction of full, row by row; null without the column. */
export function fractions(look: Look): Float64Array | null {
  const full = fullOutput(look.profile.controller);
  return look.samples.output?.map((value) => value / full) ?? null;
}

/** Smallest motion that is certainly motion, profile unit. */
export function noticeable(look: Look): number {
  const { sensor } = look.profile;
  const size = Math.abs(look.move.to - look.move.from);
  return Math.max(4 * (sensor?.resolution ?? 0), 6 * (sensor?.noise ?? 0), 0.01 * size, 1e-12);
}

/** What starts the mechanism, fraction of full output: learnt, else the nameplate's, else a cautious guess. */
export function breakawayOf(look: Look): number {
  const known = look.response ?? look.nameplate;
  return known === null ? 0.12 : Math.max(known.breakaway, known.breakawayBack);
}

/** The weight's share, fraction of full output; a cautious guess where weight acts and nothing is known. */
export function holdOf(look: Look): number {
  const known = look.response ?? look.nameplate;
  const weighs = look.profile.kind === 'lift' || look.profile.kind === 'arm';
  if (!weighs) return 0;
  return known === null ? 0.3 : Math.abs(known.hold);
}
