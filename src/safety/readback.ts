import {
  type Convention,
  conventionOf,
  type GainLine,
  gainLines,
  NoEquivalent,
  toConvention,
} from '../controller/forms.ts';
import { fullOutput, type Gains } from '../controller/settings.ts';
import type { Profile } from '../mechanism/profile.ts';
import { formatNumber } from '../mechanism/quantity.ts';

/** Gains as a person enters them and reads them back. */
export interface GainSheet {
  readonly lines: readonly GainLine[];
  /** The convention they are written in, where it is not parallel with seconds; null otherwise. */
  readonly written: string | null;
}

/** Gains as the profile's own controller writes them; where its form cannot, in parallel form with seconds, and says so. */
export function gainSheet(gains: Gains, profile: Profile): GainSheet {
  const own = conventionOf(profile.controller);
  const full = fullOutput(profile.controller);
  const lines = (to: Convention) => gainLines(toConvention(gains, full, to), to, profile.unit);
  const isUsual = own.form === 'parallel' && own.timeBase === 'seconds';
  try {
    return { lines: lines(own), written: isUsual ? null : `${own.form} form, ${own.timeBase}` };
  } catch (error) {
    if (!(error instanceof NoEquivalent)) throw error;
    const usual: Convention = { ...own, form: 'parallel', timeBase: 'seconds' };
    return {
      lines: lines(usual),
      written: `parallel form, seconds: the ${own.form} form of this controller cannot write them`,
    };
  }
}

/** A sheet on one line, every term named: `Kp 23.3, Ki 0, Kd 0.4, zone 0.05 m, hold 0.036`. */
export function sheetLine({ lines, written }: GainSheet): string {
  const said = lines.map(({ label, value, unit }) => {
    const amount = value === null ? 'off' : formatNumber(value, 5);
    return label === 'zone' && value !== null ? `zone ${amount} ${unit}` : `${label} ${amount}`;
  });
  return `${said.join(', ')}${written === null ? '' : ` (${written})`}`;
}

const OUTPUT_WORDS = { fraction: '', percent: ' %', volts: ' V' } as const;

/** An output cap (fraction of full) as the controller says it: `0.4 (40 % of full)`, `40 %`, `4.8 V (40 % of full)`. */
export function capWords(outputCap: number, profile: Profile): string {
  const { unit } = profile.controller.output;
  const own = `${formatNumber(outputCap * fullOutput(profile.controller), 3)}${OUTPUT_WORDS[unit]}`;
  return unit === 'percent' ? own : `${own} (${formatNumber(100 * outputCap, 3)} % of full)`;
}
