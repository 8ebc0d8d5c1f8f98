import type { Gains } from '../controller/settings.ts';
import type { Profile } from '../mechanism/profile.ts';
import { formatNumber } from '../mechanism/quantity.ts';
import { gainSheet } from '../safety/readback.ts';
import { hanging, type Page, set, table } from './page.ts';

const valueText = (value: number | null) => (value === null ? 'off' : formatNumber(value, 5));

/** Gains to enter, a row each with its unit, as the profile's own controller writes them. */
export function gainsTable(gains: Gains, profile: Profile, page: Page): string {
  const { lines, written } = gainSheet(gains, profile);
  const rows = lines.map(({ label, value, unit }) => [label, valueText(value), unit]);
  const note = written === null ? [] : hanging('', `Written in ${written}.`, page, 0);
  return set([...table(rows, ['left', 'right', 'left'], page), ...note], page);
}

/** Gains on one line, those that are off left out: `Kp 23.3 · hold 0.036`. */
export function gainsLine(gains: Gains, profile: Profile): string {
  const { lines, written } = gainSheet(gains, profile);
  const said = lines
    .filter(({ label, value }) => label === 'Kp' || label === 'K' || (value !== null && value !== 0))
    .map(({ label, value, unit }) => `${label} ${valueText(value)}${label === 'zone' ? ` ${unit}` : ''}`);
  return `${said.join(' · ')}${written === null ? '' : ` (${written})`}`;
}
