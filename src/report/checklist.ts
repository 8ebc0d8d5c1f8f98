import type { Profile } from '../mechanism/profile.ts';
import { formatNumber } from '../mechanism/quantity.ts';
import type { Checklist, HazardFigures } from '../safety/hazard.ts';
import { energyText, lengthText, NOT_KNOWN } from '../safety/items.ts';
import { speedText } from './amounts.ts';
import { hanging, type Page, set, table } from './page.ts';

/** A whole checklist for the screen or for paper: figures, boxes to tick (`ticked` ones filled), when to stop, what comes after. */
export function checklistText(
  checklist: Checklist,
  profile: Profile,
  page: Page,
  ticked: readonly string[] = [],
): string {
  const bullets = (texts: readonly string[]) => texts.flatMap((text) => hanging('  -', text, page, 4));
  return set(
    [
      `What this trial of ${profile.title} can do, at its worst in 99 of 100 rehearsals`,
      ...table(dangerRows(checklist.figures, profile), ['left', 'left'], page),
      '',
      'Before power',
      ...checklist.items.flatMap(({ id, text }) => hanging(ticked.includes(id) ? '  [x]' : '  [ ]', text, page, 6)),
      '',
      'Disable at once if',
      ...bullets(checklist.abort),
      '',
      'After',
      ...bullets(checklist.after),
      '',
      ...checklist.cautions.flatMap((text) => hanging('', text, page, 0)),
      '',
      'Ticked by ____________________   at ________',
    ],
    page,
  );
}

/** What this trial could do, a row a figure; what is not known says so. */
export function dangerRows(figures: HazardFigures, profile: Profile): readonly (readonly string[])[] {
  const { travelForward, travelBack, topSpeed, coast, coastShorted, drop, rimSpeed } = figures;
  const spins = profile.quantity === 'speed' && profile.kind !== 'travel' && profile.kind !== 'lift';
  const on = (value: number | null) => {
    if (!spins) return lengthText(profile, value);
    return value === null ? NOT_KNOWN : `${formatNumber(value, 2)} s`;
  };
  const rows: (readonly string[])[] = [];
  if (!spins) {
    const reach = `${lengthText(profile, travelForward)} forward, ${lengthText(profile, travelBack)} back of its start`;
    rows.push(['  can reach', reach]);
  }
  rows.push(['  fastest', topSpeed === null ? NOT_KNOWN : speedText(topSpeed, profile)]);
  rows.push(['  energy', figures.energy === null ? NOT_KNOWN : energyText(figures)]);
  rows.push(['  goes on', `${on(coast)} after disable, ${on(coastShorted)} if the motor is shorted`]);
  if (profile.hazards.includes('falls')) {
    const fall = (one: NonNullable<typeof drop>) =>
      `${formatNumber(one.height, 2)} m in ${formatNumber(one.time, 2)} s, with ${formatNumber(one.energy, 2)} J`;
    rows.push(['  can drop', drop === null ? NOT_KNOWN : fall(drop)]);
  }
  if (profile.hazards.includes('spins')) {
    rows.push(['  rim speed', rimSpeed === null ? NOT_KNOWN : `${formatNumber(rimSpeed, 2)} m/s`]);
  }
  return rows;
}
