import type { Proposal } from '../coach/step.ts';
import type { Profile } from '../mechanism/profile.ts';
import { formatNumber, formatQuantity } from '../mechanism/quantity.ts';
import type { Checklist } from '../safety/hazard.ts';
import { lengthText, NOT_KNOWN } from '../safety/items.ts';
import { capText } from './gains-text.ts';
import { columned, wrapped } from './page.ts';

/** What this trial could do, a line a figure; what is not known says so. */
function dangerLines({ figures }: Checklist, profile: Profile): readonly string[] {
  const number = (value: number | null, unit: string) =>
    value === null || !Number.isFinite(value) ? NOT_KNOWN : `${formatNumber(value, 3)} ${unit}`;
  const turnsInPlace = profile.quantity === 'speed' && profile.kind !== 'travel' && profile.kind !== 'lift';
  const coast = (value: number | null) => (turnsInPlace ? number(value, 's') : lengthText(profile, value));
  const { drop } = figures;
  const rows: string[][] = [
    ['fastest', number(figures.topSpeed, profile.quantity === 'speed' ? profile.unit : `${profile.unit}/s`)],
    ['energy', `${figures.energyIsLeast && figures.energy !== null ? 'at least ' : ''}${number(figures.energy, 'J')}`],
    [
      'coasts on',
      figures.coast === null
        ? NOT_KNOWN
        : `${coast(figures.coast)} after disable; ${coast(figures.coastShorted)} with the motor braking`,
    ],
  ];
  if (!turnsInPlace) {
    const [forward, back] = [lengthText(profile, figures.travelForward), lengthText(profile, figures.travelBack)];
    rows.unshift([
      'can travel',
      figures.travelForward === null ? NOT_KNOWN : `${forward} forward, ${back} back of its start`,
    ]);
  }
  if (profile.hazards.includes('falls')) {
    const fall = drop && `${number(drop.height, 'm')} in ${number(drop.time, 's')}, with ${number(drop.energy, 'J')}`;
    rows.push(['can drop', fall ?? NOT_KNOWN]);
  }
  if (profile.kind === 'spin') rows.push(['rim speed', number(figures.rimSpeed, 'm/s')]);
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
  return [
    ...dangersPart(checklist, profile, width),
    '',
    'Before power',
    ...checklist.items.flatMap(({ text }) => bullet('[ ]', text, width)),
    '',
    ...abortPart(checklist, width),
    '',
    ...afterPart(checklist, width),
    '',
    ...checklist.cautions.flatMap((text) => wrapped(text, width)),
  ].join('\n');
}

/** The same for a person at a terminal, up to the items, which are asked one by one. */
export function briefingText(checklist: Checklist, profile: Profile, width: number): string {
  return [
    ...dangersPart(checklist, profile, width),
    '',
    ...abortPart(checklist, width),
    '',
    ...checklist.cautions.flatMap((text) => wrapped(text, width)),
  ].join('\n');
}

const bullet = (mark: string, text: string, width: number) =>
  wrapped(text, width - mark.length - 3).map((line, k) => `  ${k === 0 ? mark : ' '.repeat(mark.length)} ${line}`);

const dangersPart = (checklist: Checklist, profile: Profile, width: number): readonly string[] => [
  'What this trial can do, at its worst',
  ...dangerLines(checklist, profile).flatMap((line) => wrapped(line, width - 2).map((part) => `  ${part}`)),
];

const abortPart = ({ abort }: Checklist, width: number): readonly string[] => [
  'Disable at once if',
  ...abort.flatMap((text) => bullet('-', text, width)),
];

/** What comes after the trial, before any hand. */
export const afterPart = ({ after }: Checklist, width: number): readonly string[] => [
  'After',
  ...after.flatMap((text) => bullet('-', text, width)),
];
