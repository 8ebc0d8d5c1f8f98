import type { Gains } from '../controller/settings.ts';
import type { Profile } from '../mechanism/profile.ts';
import { formatNumber } from '../mechanism/quantity.ts';
import { capWords, gainSheet } from '../safety/readback.ts';

/** Gains on one line as the profile's controller writes them, terms that are off left out: `Kp 23.3 · hold 0.0364`. */
export function gainsLine(gains: Gains, profile: Profile): string {
  const { lines, written } = gainSheet(gains, profile);
  const shown = lines
    .filter(({ label, value }) => label === 'Kp' || label === 'K' || (value !== null && value !== 0))
    .map(({ label, value, unit }) => `${label} ${formatNumber(value ?? 0, 5)}${label === 'zone' ? ` ${unit}` : ''}`);
  return `${shown.join(' · ')}${written === null ? '' : ` (${written})`}`;
}

/** An output cap in words: `output at most 0.4 (40 % of full)`; nothing is said to be capped at full output. */
export function capText(outputCap: number, profile: Profile): string {
  return outputCap >= 1 ? 'full output allowed' : `output at most ${capWords(outputCap, profile)}`;
}
