import type { Hazard, Profile } from '../mechanism/profile.ts';
import { formatNumber, formatQuantity } from '../mechanism/quantity.ts';
import type { Checklist, ChecklistItem, HazardFigures } from './hazard.ts';
import type { PlannedTrial } from './hazards.ts';

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
    after: AFTER,
    cautions: CAUTIONS,
  };
}

const item = (id: string, text: string, hazard: Hazard | null = null): ChecklistItem => ({ id, text, hazard });

const length = (profile: Profile, value: number | null) =>
  value === null || !Number.isFinite(value) ? NOT_KNOWN : formatQuantity(value, profile.unit);

type Items = (profile: Profile, figures: HazardFigures, trial: PlannedTrial) => readonly ChecklistItem[];

const ALWAYS: Items = (profile, figures, trial) => [
  item('disable', 'The disable switch is within reach and was tried today.'),
  item('voice', 'One person speaks; everyone else is silent while it is powered.'),
  item('area', areaText(profile, figures)),
  item('eyes', 'Eye protection is on, everyone near.'),
  item('hands', 'No hands, hair, sleeves or lanyards inside its envelope.'),
  item('battery', 'The battery is strapped in and its leads are undamaged.'),
  item(
    'readback',
    `Gains and output cap were read back from the robot and equal this sheet: Kp ${formatNumber(trial.gains.kp, 4)}, Ki ${formatNumber(trial.gains.ki, 4)}, Kd ${formatNumber(trial.gains.kd, 4)}, cap ${formatNumber(100 * trial.outputCap, 3)} % of full output.`,
  ),
  item('roles', 'It is agreed who watches and who logs.'),
  item('ends', 'It is agreed what ends the trial, and who says the word.'),
];

function areaText(profile: Profile, { travelForward, travelBack }: HazardFigures): string {
  if (profile.quantity === 'speed') return 'The area is clear all round; it spins where it stands.';
  return `The area is clear: it can reach ${length(profile, travelForward)} forward and ${length(profile, travelBack)} back of its start, a late disable included.`;
}

const BY_HAZARD: readonly { readonly hazard: Hazard; readonly items: Items }[] = [
  {
    hazard: 'drives',
    items: (profile, figures) => [
      item('drives-blocks', 'Wheels were run off the floor first, and turned the right way.', 'drives'),
      item(
        'drives-floor',
        `The floor is marked and clear for ${length(profile, figures.travelForward)}, with someone at the far end.`,
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
    items: (_, figures) => [
      item(
        'spins-guard',
        `The guard is on and nothing is loose on what spins. Rim speed: ${figures.rimSpeed === null ? NOT_KNOWN : `${formatNumber(figures.rimSpeed, 2)} m/s`}.`,
        'spins',
      ),
      item(
        'spins-stop',
        `Nobody goes near before it stands still: ${figures.coast === null || !Number.isFinite(figures.coast) ? NOT_KNOWN : `up to ${formatNumber(figures.coast, 2)} s after disable`}.`,
        'spins',
      ),
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

function dropText({ drop }: HazardFigures): string {
  if (drop === null) return `Drop: ${NOT_KNOWN}.`;
  return `It can drop ${formatNumber(drop.height, 2)} m in ${formatNumber(drop.time, 2)} s, with ${formatNumber(drop.energy, 2)} J.`;
}

function pinchText({ limits, unit, quantity }: Profile): string {
  const end = (value: number | null) => (value === null ? NOT_KNOWN : `${formatNumber(value, 4)} ${unit}`);
  if (quantity === 'speed') return 'Guards are on, or everyone keeps more than a hand’s width from where it draws in.';
  return `Guards are on, or everyone keeps more than a hand’s width from where the travel ends: ${end(limits.min)} and ${end(limits.max)}.`;
}

function abortOf(profile: Profile, figures: HazardFigures, trial: PlannedTrial): readonly string[] {
  const { min, max } = profile.limits;
  const past =
    profile.quantity === 'speed'
      ? `It runs faster than ${figures.topSpeed === null ? NOT_KNOWN : formatQuantity(1.1 * figures.topSpeed, profile.unit)}.`
      : `It goes past ${max === null ? NOT_KNOWN : `${max} ${profile.unit}`} or below ${min === null ? NOT_KNOWN : `${min} ${profile.unit}`}.`;
  return [
    'It swings wider each time.',
    past,
    `The output stays at its limit for longer than ${formatNumber(Math.max(0.5, trial.duration / 3), 2)} s without getting there.`,
    'It is hotter or louder than before, or smells.',
    'Anyone says stop.',
  ];
}

const AFTER: readonly string[] = ['Disable first, then hands.', 'Note heat, noise and anything loose.'];

/** What the wording rests on, in general terms: ISO 12100, IEC 60204-1, ISO 13850, 29 CFR 1910.147, ANSI Z87.1. Conformity with none is claimed. */
const CAUTIONS: readonly string[] = [
  'Holdfast reduces surprise; it is no safeguard, and claims conformity with no standard.',
  'Your event’s rules, your team’s safety lead, the machine’s maker and local law come first.',
  'Guarding, electrical work and lifting gear are for people qualified to do them.',
];
