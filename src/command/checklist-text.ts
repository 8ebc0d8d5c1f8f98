import type { Proposal } from '../coach/step.ts';
import type { Profile } from '../mechanism/profile.ts';
import { formatNumber, formatQuantity } from '../mechanism/quantity.ts';
import type { Checklist } from '../safety/hazard.ts';
import { NOT_KNOWN } from '../safety/items.ts';
import { capText } from './gains-text.ts';
import { columned, wrapped } from './page.ts';

/** What this trial could do, a line a figure; what is not known says so. */
export function dangerLines({ figures }: Checklist, profile: Profile): readonly string[] {
  const amount = (value: number | null, unit = '') =>
    value === null || !Number.isFinite(value) ? NOT_KNOWN : `${formatNumber(value, 3)}${unit}`;
  const inUnit = (value: number | null) =>
    value === null || !Number.isFinite(value) ? NOT_KNOWN : formatQuantity(value, profile.unit);
  const speed = profile.quantity === 'speed';
  const perSecond = (value: number | null) =>
    value === null || !Number.isFinite(value)
      ? NOT_KNOWN
      : `${formatNumber(value, 3)} ${profile.unit}${speed ? '' : '/s'}`;
  const rows: string[][] = speed
    ? [['fastest', perSecond(figures.topSpeed)]]
    : [
        ['can travel', `${inUnit(figures.travelForward)} forward, ${inUnit(figures.travelBack)} back of its start`],
        ['fastest', perSecond(figures.topSpeed)],
      ];
  rows.push(['energy', amount(figures.energy, ' J')]);
  const coast = (value: number | null) => (speed ? amount(value, ' s') : inUnit(value));
  rows.push([
    'coasts on',
    `${coast(figures.coast)} after disable (${coast(figures.coastShorted)} with the motor braking)`,
  ]);
  if (profile.hazards.includes('falls')) {
    const { drop } = figures;
    rows.push([
      'can drop',
      drop === null
        ? NOT_KNOWN
        : `${formatNumber(drop.height, 2)} m in ${formatNumber(drop.time, 2)} s, with ${formatNumber(drop.energy, 2)} J`,
    ]);
  }
  if (profile.kind === 'spin') rows.push(['rim speed', amount(figures.rimSpeed, ' m/s')]);
  return columned(rows, ['left', 'left']);
}

/** The trial that is to be powered, in one line. */
export function trialLine(proposal: Proposal, profile: Profile): string {
  const resolution = profile.sensor?.resolution ?? 0;
  const end = (value: number) => formatQuantity(value, profile.unit, resolution);
  const { move, outputCap, duration } = proposal;
  return `${end(move.from)} → ${end(move.to)}, recorded for ${formatNumber(duration, 2)} s, ${capText(outputCap, profile)}`;
}

/** A whole checklist on paper: figures, boxes to tick, when to stop, what comes after. */
export function checklistText(checklist: Checklist, profile: Profile, width: number): string {
  const bullet = (mark: string, text: string) =>
    wrapped(text, width - mark.length - 3).map((line, k) => `  ${k === 0 ? mark : ' '.repeat(mark.length)} ${line}`);
  return [
    'What this trial can do, at its worst in 99 of 100 rehearsals',
    ...dangerLines(checklist, profile).flatMap((line) => wrapped(line, width - 2).map((part) => `  ${part}`)),
    '',
    'Before power',
    ...checklist.items.flatMap(({ text }) => bullet('[ ]', text)),
    '',
    'Disable at once if',
    ...checklist.abort.flatMap((text) => bullet('-', text)),
    '',
    'After',
    ...checklist.after.flatMap((text) => bullet('-', text)),
    '',
    ...checklist.cautions.flatMap((text) => wrapped(text, width)),
  ].join('\n');
}
