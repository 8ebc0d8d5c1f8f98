import { type Convention, conventionOf, gainLines, NoEquivalent, toConvention } from '../controller/forms.ts';
import { fullOutput, type Gains } from '../controller/settings.ts';
import type { Profile } from '../mechanism/profile.ts';
import { formatNumber } from '../mechanism/quantity.ts';

/** A line of gains as a person enters it: name, number, unit. */
export interface GainEntry {
  readonly label: string;
  /** "off" where the term is absent. */
  readonly value: string;
  readonly number: number | null;
  readonly unit: string;
}

/**
 * Gains as the profile's controller writes them: its form, its time base, its output unit.
 *
 * @throws {NoEquivalent} when that form cannot express them
 */
export function gainEntries(
  gains: Gains,
  profile: Profile,
  convention = conventionOf(profile.controller),
): readonly GainEntry[] {
  const entered = toConvention(gains, fullOutput(profile.controller), convention);
  return gainLines(entered, convention, profile.unit).map(({ label, value, unit }) => ({
    label,
    value: value === null ? 'off' : formatNumber(value, 5),
    number: value,
    unit,
  }));
}

/**
 * Gains on one line, those that are off left out, in the controller's own convention where that can express them:
 * `Kp 23.3 · hold 0.0364`.
 */
export function gainsLine(gains: Gains, profile: Profile): string {
  const own = conventionOf(profile.controller);
  const { entries, note } = expressible(gains, profile, own);
  const shown = entries.filter(({ label, value }) => isMain(label) || (value !== '0' && value !== 'off'));
  const line = shown
    .map(({ label, value, unit }) => (label === 'zone' ? `zone ${value} ${unit}` : `${label} ${value}`))
    .join(' · ');
  return line + note;
}

const isMain = (label: string) => label === 'Kp' || label === 'K';

function expressible(
  gains: Gains,
  profile: Profile,
  own: Convention,
): { readonly entries: readonly GainEntry[]; readonly note: string } {
  const said = own.form === 'parallel' && own.timeBase === 'seconds' ? '' : ` (${own.form}, ${own.timeBase})`;
  try {
    return { entries: gainEntries(gains, profile, own), note: said };
  } catch (error) {
    if (!(error instanceof NoEquivalent)) throw error;
    const parallel: Convention = { ...own, form: 'parallel', timeBase: 'seconds' };
    return {
      entries: gainEntries(gains, profile, parallel),
      note: ` (parallel, seconds: the ${own.form} form cannot write these)`,
    };
  }
}
