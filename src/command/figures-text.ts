import type { Profile } from '../mechanism/profile.ts';
import { formatNumber, formatQuantity } from '../mechanism/quantity.ts';
import type { Figures } from '../trial/figures.ts';
import { columned } from './page.ts';

/** Figures against the target, a line each; those that have no value say why they have none. */
export function figureLines(figures: Figures, profile: Profile, against: 'target' | 'nothing'): readonly string[] {
  const amount = (value: number) => formatQuantity(value, profile.unit, profile.sensor?.resolution ?? 0);
  const seconds = (value: number) => `${formatNumber(value, 2)} s`;
  const percent = (value: number) => `${formatNumber(value, 2)} %`;
  const { target } = profile;
  const row = (name: string, value: string, bound: string, met: boolean | null) =>
    against === 'nothing' || met === null ? [name, value] : [name, value, bound, met ? 'met' : 'MISSED'];
  const { settlingTime, restingError, overshoot } = figures;
  const rows = [
    row('rise time', figures.riseTime === null ? 'not reached' : seconds(figures.riseTime), '', null),
    row('overshoot', percent(overshoot), `at most ${percent(target.overshoot)}`, overshoot <= target.overshoot),
    row(
      'settling time',
      settlingTime === null ? 'did not settle' : seconds(settlingTime),
      `at most ${seconds(target.settlingTime)}`,
      settlingTime !== null && settlingTime <= target.settlingTime,
    ),
    row(
      'resting error',
      restingError === null ? 'still moving at the end' : amount(restingError),
      `within ${amount(target.tolerance)}`,
      restingError === null ? null : Math.abs(restingError) <= target.tolerance,
    ),
  ];
  if (figures.swingRatio !== null && figures.swingPeriod !== null) {
    rows.push([
      'swing',
      `each ${percent(100 * figures.swingRatio)} of the one before, every ${seconds(figures.swingPeriod)}`,
    ]);
  }
  if (figures.saturated > 0.005) rows.push(['output at its limit', `${percent(100 * figures.saturated)} of the way`]);
  if (figures.chatter !== null && figures.chatter > 0.5) {
    rows.push(['output reversals', `${formatNumber(figures.chatter, 2)} a second`]);
  }
  return columned(rows, ['left', 'left', 'left', 'left']);
}
