import type { TrialReading, TrialRecord } from '../coach/step.ts';
import type { Profile } from '../mechanism/profile.ts';
import { amount, moveText, percent, seconds } from './amounts.ts';
import { gainsLine } from './gains.ts';
import { hanging, type Page, set, table } from './page.ts';

/** A trial with what was made of it. */
export interface ReadTrial {
  readonly record: TrialRecord;
  readonly reading: TrialReading;
}

const HEAD = ['', 'stage', 'settles', 'past', 'rests', 'band', 'gains and verdict'];
const ALIGN = ['right', 'left', 'right', 'right', 'right', 'left', 'left'] as const;

/** How a run got to where it is: a line a trial, newest last. */
export function ledgerTable(trials: readonly ReadTrial[], profile: Profile, page: Page): string {
  if (trials.length === 0) return 'No trial was run yet.';
  return set(table([HEAD, ...trials.map((trial) => cells(trial, profile))], ALIGN, page), page);
}

/** One trial on one line, for a log of the run: `3 integral · 0.2 m → 1 m · settles 0.72 s … · Kp 12 · kept to its band`. */
export function trialLine({ record, reading }: ReadTrial, profile: Profile, page: Page): string {
  const { settlingTime, overshoot } = reading.figures;
  const settles = settlingTime === null ? 'did not settle' : `settled in ${seconds(settlingTime)}`;
  const verdict = reading.verdicts.map(({ is }) => is).join(', ');
  const parts = [
    `${record.trial} ${record.stage}`,
    moveText(record.move, profile),
    settles,
    `${percent(overshoot)} past`,
    gainsLine(record.gains, profile),
    BAND_WORDS[bandKey(reading)],
    ...(verdict === '' ? [] : [verdict]),
    ...(reading.meets ? ['meets the target'] : []),
  ];
  return set(hanging('', parts.join(' · '), page, 0), page);
}

const BAND_WORDS = { kept: 'kept to its band', left: 'LEFT ITS BAND', none: 'no band promised' } as const;
const bandKey = ({ inBand }: TrialReading) => (inBand === null ? 'none' : inBand ? 'kept' : 'left');

function cells({ record, reading }: ReadTrial, profile: Profile): readonly string[] {
  const { settlingTime, overshoot, restingError } = reading.figures;
  const verdict = reading.verdicts.map(({ is }) => is).join(', ');
  return [
    String(record.trial),
    record.stage,
    settlingTime === null ? 'never' : seconds(settlingTime),
    percent(overshoot),
    restingError === null ? 'moves' : amount(restingError, profile),
    { kept: 'in', left: 'OUT', none: '–' }[bandKey(reading)],
    [gainsLine(record.gains, profile), ...(verdict === '' ? [] : [verdict])].join(' · '),
  ];
}
