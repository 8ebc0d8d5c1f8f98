import type { Margins } from '../margin/margins.ts';
import { formatNumber } from '../mechanism/quantity.ts';
import { milliseconds } from './amounts.ts';
import { hanging, type Page, set } from './page.ts';

/** Usual bounds of a loop that forgives: gain × 2, phase 30°, sensitivity 2. Common practice (Ms ≤ 2 is the coach's own bound). */
const ENOUGH = { gain: 2, phase: 30, maxSensitivity: 2 } as const;

/** How far the loop is from swinging, in words and figures. */
export function marginsText(margins: Margins, page: Page): string {
  const { gain, phase, delay, maxSensitivity, spectralRadius } = margins;
  if (!(spectralRadius < 1)) {
    return set(
      hanging('Margins', 'None: without friction this loop swings wider and wider. Lower the gains.', page),
      page,
    );
  }
  const grown =
    gain === null
      ? 'The machine may answer any amount stronger'
      : `The machine may answer ${formatNumber(gain, 2)} times as strongly`;
  const late = delay === null ? 'any amount later' : `${milliseconds(delay)} later`;
  const turned = phase === null ? '' : ` Phase margin ${formatNumber(phase, 2)}°;`;
  const tight =
    (gain !== null && gain < ENOUGH.gain) ||
    (phase !== null && phase < ENOUGH.phase) ||
    maxSensitivity > ENOUGH.maxSensitivity;
  const judged = tight
    ? 'Tight: a warm motor or a fresh battery can make it swing.'
    : 'Enough to forgive a battery or a load.';
  return set(
    hanging(
      'Margins',
      `${judged} ${grown}, or ${late}, before it swings.${turned} largest sensitivity ${formatNumber(maxSensitivity, 3)}.`,
      page,
    ),
    page,
  );
}
