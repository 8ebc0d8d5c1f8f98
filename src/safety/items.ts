import type { Hazard, Move, Profile } from '../mechanism/profile.ts';
import { formatNumber, formatQuantity } from '../mechanism/quantity.ts';
import type { Checklist, ChecklistItem, HazardFigures } from './hazard.ts';
import type { PlannedTrial } from './hazards.ts';
import { capWords, gainSheet, sheetLine } from './readback.ts';

/** Shown for every figure that is not known; never a small number. */
export const NOT_KNOWN = 'not known: assume the worst';

/** The checklist of one powered trial, with this trial's own figures in its words. */
export function checklistOf(profile: Profile, figures: HazardFigures, trial: PlannedTrial): Checklist {
  const hazards = profile.hazards;
  return {
    profile: profile.name,
    figures,
    items: [
      ...ALWAYS(profile, figures, trial),
      ...BY_HAZARD.filter((entry) => hazards.includes(entry.hazard)).flatMap((entry) =>
        entry.items(profile, figures, trial),
      ),
    ],
    abort: abortOf(profile, figures, trial),
    after: afterOf(profile, figures),
    cautions: CAUTIONS,
  };
}

const item = (id: string, text: string, hazard: Hazard | null = null): ChecklistItem => ({ id, text, hazard });

/**
 * What a checklist must ask and does not: ids of items that are always asked, and hazards of the profile without an item.
 */
export function unaskedItems(profile: Profile, items: readonly ChecklistItem[]): readonly string[] {
  return [
    ...ALWAYS_ASKED.filter((id) => !items.some((one) => one.id === id)),
    ...profile.hazards.filter((hazard) => !items.some((one) => one.hazard === hazard)),
  ];
}

const ALWAYS_ASKED = ['disable', 'voice', 'area', 'eyes', 'hands', 'battery', 'readback', 'roles', 'ends'] as const;

/** Does the trial take it from one place to another? A speed loop about an axis turns where it stands. */
const goesPlaces = ({ quantity, kind }: Profile) => quantity === 'position' || kind === 'travel' || kind === 'lift';

/** A distance of the trial's; never a number for what is not known. */
export const lengthText = (profile: Profile, value: number | null): string =>
  value === null || !Number.isFinite(value) ? NOT_KNOWN : formatQuantity(value, distanceUnit(profile.unit));

/** The unit of a distance: a speed loop's without the "per second". */
function distanceUnit(unit: Profile['unit']): Profile['unit'] {
  return unit === 'rpm' ? 'rev' : (unit.replace('/s', '') as Profile['unit']);
}

type Items = (profile: Profile, figures: HazardFigures, trial: PlannedTrial) => readonly ChecklistItem[];

const ALWAYS: Items = (profile, figures, trial) => [
  item('disable', 'The disable switch is within reach and was tried today.'),
  item('voice', 'One person speaks; everyone else is silent while it is powered.'),
  item('area', areaText(profile, figures, trial)),
  item('eyes', 'Eye protection is on, everyone near.'),
  item('hands', 'No hands, hair, sleeves or lanyards inside its envelope.'),
  item('battery', 'The battery is strapped in and its leads are undamaged.'),
  item(
    'readback',
    `Gains and output cap were read back from the robot and equal this sheet: ${sheetLine(gainSheet(trial.gains, profile))}; output cap ${capWords(trial.outputCap, profile)}.`,
  ),
  item('roles', 'It is agreed who watches and who logs.'),
  item('ends', 'It is agreed what ends the trial, and who says the word.'),
];

function areaText(profile: Profile, figures: HazardFigures, { move }: PlannedTrial): string {
  const { travelForward, travelBack } = figures;
  if (!goesPlaces(profile))
    return `The area is clear all round: it turns where it stands, with ${energyText(figures)}.`;
  const reach = `it can reach ${lengthText(profile, travelForward)} forward and ${lengthText(profile, travelBack)} back of its start`;
  return `The area is clear on both sides: ${reach}, a late disable included, with ${energyText(figures)}.${stopText(profile, figures, move)}`;
}

/** Said when the reach goes beyond a travel limit; what falls rests on its lower one anyhow. */
function stopText({ limits }: Profile, { travelForward, travelBack }: HazardFigures, { from }: Move): string {
  const upper = limits.max !== null && travelForward !== null && from + travelForward > limits.max;
  const lower = limits.min !== null && travelBack !== null && from - travelBack < limits.min;
  if (!upper && !lower) return '';
  const ends = upper && lower ? 'either end' : upper ? 'the upper end' : 'the lower end';
  return ` A late disable would drive it past ${ends} of its travel, into whatever stops it there.`;
}

/** "up to 202 J" – or that there is more of it, or that it is not known. */
export function energyText({ energy, energyIsLeast }: HazardFigures): string {
  if (energy === null) return `an energy that is ${NOT_KNOWN}`;
  return energyIsLeast === true
    ? `more than ${formatNumber(energy, 3)} J, the rotors’ share not known`
    : `up to ${formatNumber(energy, 3)} J`;
}

const BY_HAZARD: readonly { readonly hazard: Hazard; readonly items: Items }[] = [
  {
    hazard: 'drives',
    items: (profile, figures) => [
      item('drives-blocks', 'Wheels were run off the floor first, and turned the right way.', 'drives'),
      item(
        'drives-floor',
        `The floor is marked and clear for ${lengthText(profile, figures.travelForward)} ahead and ${lengthText(profile, figures.travelBack)} behind, with someone at the far end.`,
        'drives',
      ),
    ],
  },
  {
    hazard: 'falls',
    items: (_, figures) => [
      item(
        'falls-support',
        `It is supported or at its lowest rest before power and before hands. ${dropText(figures)}`,
        'falls',
      ),
      item('falls-under', 'Nobody is under it, at any time.', 'falls'),
    ],
  },
  {
    hazard: 'pinch',
    items: (profile) => [item('pinch-guard', pinchText(profile), 'pinch')],
  },
  {
    hazard: 'spins',
    items: (profile, figures) => [
      item(
        'spins-guard',
        `The guard is on and nothing is loose on what spins. Rim speed: ${figures.rimSpeed === null ? NOT_KNOWN : `${formatNumber(figures.rimSpeed, 2)} m/s`}.`,
        'spins',
      ),
      item('spins-stop', spinText(profile, figures), 'spins'),
    ],
  },
  {
    hazard: 'stored-energy',
    items: () => [
      item(
        'stored',
        'Springs, bands and air are released or pinned before hands; after disable it may still move.',
        'stored-energy',
      ),
    ],
  },
  {
    hazard: 'overhead',
    items: () => [item('overhead', 'There is headroom for its whole travel, and nobody stands under it.', 'overhead')],
  },
];

/** How long it spins on is known of a speed loop only: a position loop's coasting is a distance. */
function spinText({ quantity }: Profile, { coast }: HazardFigures): string {
  const how = quantity !== 'speed' || coast === null ? NOT_KNOWN : `up to ${seconds(coast)} after disable`;
  return `Nobody goes near before it stands still: ${how}.`;
}

function dropText({ drop }: HazardFigures): string {
  if (drop === null) return `Drop: ${NOT_KNOWN}.`;
  return `It can drop ${formatNumber(drop.height, 2)} m in ${formatNumber(drop.time, 2)} s, with ${formatNumber(drop.energy, 2)} J.`;
}

function pinchText({ limits, unit, quantity, continuous }: Profile): string {
  const end = (value: number | null) => (value === null ? NOT_KNOWN : `${formatNumber(value, 4)} ${unit}`);
  if (quantity === 'speed') return 'Guards are on, or everyone keeps more than a hand’s width from where it draws in.';
  if (continuous !== null && limits.min === null && limits.max === null)
    return 'Guards are on, or everyone keeps more than a hand’s width from wherever it passes something fixed.';
  return `Guards are on, or everyone keeps more than a hand’s width from where the travel ends: ${end(limits.min)} and ${end(limits.max)}.`;
}

function abortOf(profile: Profile, figures: HazardFigures, trial: PlannedTrial): readonly string[] {
  return [
    `It swings wider each time${swingText(profile, trial)}.`,
    pastText(profile, figures),
    `The output stays at its limit for longer than ${formatNumber(Math.max(0.5, trial.duration / 3), 2)} s without getting there.`,
    'It is hotter or louder than before, or smells.',
    'Anyone says stop.',
  ];
}

/** A second overshoot by half more than the target allows. */
function swingText({ target, unit, sensor }: Profile, { move }: PlannedTrial): string {
  const allowed = (target.overshoot / 100) * Math.abs(move.to - move.from);
  const size = 1.5 * Math.max(allowed, 2 * target.tolerance);
  const past = move.to + Math.sign(move.to - move.from) * size;
  return `, or overshoots a second time past ${formatQuantity(past, unit, sensor?.resolution ?? 0)}`;
}

function pastText({ limits, quantity, unit, continuous }: Profile, { topSpeed }: HazardFigures): string {
  if (quantity === 'speed')
    return `It runs faster than ${topSpeed === null ? NOT_KNOWN : formatQuantity(1.1 * topSpeed, unit)}.`;
  if (continuous !== null && limits.min === null && limits.max === null)
    return 'It goes round more than the move asks for, or winds up a cable.';
  const end = (value: number | null) => (value === null ? NOT_KNOWN : formatQuantity(value, unit));
  return `It goes past ${end(limits.max)} or below ${end(limits.min)}.`;
}

function afterOf(profile: Profile, figures: HazardFigures): readonly string[] {
  const stands =
    profile.quantity === 'speed' && !goesPlaces(profile)
      ? seconds(figures.coast)
      : `another ${lengthText(profile, figures.coast)}`;
  return [
    'Disable first, then hands.',
    figures.coast === null
      ? `Wait until it stands still. How long it goes on after disable is ${NOT_KNOWN}.`
      : `Wait until it stands still: it can go on for ${stands} after disable.`,
    'Note heat, noise and anything loose.',
  ];
}

const seconds = (value: number | null) =>
  value === null || !Number.isFinite(value) ? NOT_KNOWN : `${formatNumber(value, 2)} s`;

/** What the wording rests on, in general terms: ISO 12100, IEC 60204-1, ISO 13850, 29 CFR 1910.147, ANSI Z87.1. Conformity with none is claimed. */
const CAUTIONS: readonly string[] = [
  'Holdfast reduces surprise; it is no safeguard, and claims conformity with no standard.',
  'Your event’s rules, your team’s safety lead, the machine’s maker and local law come first.',
  'Guarding, electrical work and lifting gear are for people qualified to do them.',
];
