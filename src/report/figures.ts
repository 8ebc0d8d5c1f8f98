import type { Profile } from '../mechanism/profile.ts';
import { formatNumber } from '../mechanism/quantity.ts';
import type { Figures } from '../trial/figures.ts';
import { amount, percent, seconds } from './amounts.ts';
import { type Page, set, table } from './page.ts';

/**
 * Figures of a trial beside the target, a row each; those that have no value say why they have none. Without a target (a log of
 * nobody's, a direction check) the figures stand alone.
 */
export function figuresTable(figures: Figures, profile: Profile, against: 'target' | 'nothing', page: Page): string {
  const { target } = profile;
  const { settlingTime, restingError, overshoot, riseTime } = figures;
  const row = (name: string, value: string, bound: string, met: boolean | null) =>
    against === 'nothing' || met === null ? [name, value, '', ''] : [name, value, bound, met ? 'met' : 'MISSED'];
  const rows = [
    ...(against === 'target' ? [['', 'measured', 'target', '']] : []),
    row('rise time', riseTime === null ? 'did not get there' : seconds(riseTime), '', null),
    row('overshoot', percent(overshoot), `at most ${percent(target.overshoot)}`, overshoot <= target.overshoot),
    row(
      'settling time',
      settlingTime === null ? 'did not settle' : seconds(settlingTime),
      `at most ${seconds(target.settlingTime)}`,
      settlingTime !== null && settlingTime <= target.settlingTime,
    ),
    row(
      'resting error',
      restingError === null ? 'still moving at the end' : amount(restingError, profile),
      `within ${amount(target.tolerance, profile)}`,
      restingError === null ? null : Math.abs(restingError) <= target.tolerance,
    ),
  ];
  const aside = table(asideRows(figures), ['left', 'left'], page);
  return set([...table(rows, ['left', 'left', 'left', 'left'], page), ...aside], page);
}

/** Columns of the longest name, so that both parts of the table line up. */
const NAME_WIDTH = 'settling time'.length;

/** What is worth a row only when there is something to it. */
function asideRows(figures: Figures): readonly (readonly string[])[] {
  const rows: string[][] = [];
  if (figures.swingRatio !== null && figures.swingPeriod !== null) {
    const grows = figures.swingRatio > 1 ? 'GROWS: ' : '';
    rows.push([
      'swing'.padEnd(NAME_WIDTH),
      `${grows}each ${percent(100 * figures.swingRatio)} of the one before, every ${seconds(figures.swingPeriod)}`,
    ]);
  }
  if (figures.saturated > 0.005)
    rows.push(['at its limit'.padEnd(NAME_WIDTH), `output, ${percent(100 * figures.saturated)} of the way`]);
  if (figures.chatter !== null && figures.chatter > 0.5) {
    rows.push(['reversals'.padEnd(NAME_WIDTH), `output, ${formatNumber(figures.chatter, 2)} a second`]);
  }
  return rows;
}
