import { formatNumber } from '../../mechanism/quantity.ts';
import { type Rule, seconds, verdict } from './look.ts';

/** Ticks that do not come evenly. */
export const unevenTicks: Rule = (look) => {
  const { time } = look.samples;
  const steps = Array.from({ length: Math.max(0, time.length - 1) }, (_, k) => (time[k + 1] ?? 0) - (time[k] ?? 0));
  if (steps.length < 8) return null;
  const sorted = [...steps].sort((a, b) => a - b);
  const median = sorted[Math.floor(sorted.length / 2)] ?? 0;
  const long = steps.filter((dt) => dt > 1.6 * median).length;
  const worst = sorted.at(-1) ?? 0;
  const spread = Math.sqrt(steps.reduce((sum, dt) => sum + (dt - median) ** 2, 0) / steps.length);
  if (median <= 0 || (long < 0.03 * steps.length && spread < 0.2 * median)) return null;
  const row = steps.indexOf(worst);
  return verdict(
    'uneven-ticks',
    `Ticks come unevenly: usually every ${seconds(median)}, ${long} of ${steps.length} more than half as late again, the worst after ${seconds(worst)}.`,
    'more than 3 % of the ticks 1.6 times the usual, or a spread of a fifth of it',
    { median, long, worst, spread },
    [row, row + 1],
  );
};

/** Dead time decides what can be reached. */
export const late: Rule = (look) => {
  const { response } = look;
  if (response === null) return null;
  const { period } = look.profile.controller;
  const delay = response.delay + (look.profile.sensor?.delay ?? 0);
  if (delay <= Math.max(2.5 * period, 0.6 * response.lag, 0.08 * look.profile.target.settlingTime)) return null;
  return verdict(
    'late',
    `${seconds(delay)} pass before an output is seen, against a lag of ${seconds(response.lag)}: ${formatNumber(delay / period, 2)} ticks of dead time bound how fast any gains can be.`,
    'learnt dead time above 2.5 ticks, 0.6 of the lag and 8 % of the target time',
    { delay, lag: response.lag, period },
  );
};
