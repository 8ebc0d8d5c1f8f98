import { drawChart } from '../chart/draw.ts';
import type { Style } from '../chart/spec.ts';
import { trialChart } from '../chart/trial-chart.ts';
import type { Outcome, Proposal, TrialReading, TrialRecord } from '../coach/step.ts';
import type { Margins } from '../margin/margins.ts';
import type { Profile } from '../mechanism/profile.ts';
import { formatNumber } from '../mechanism/quantity.ts';
import { trialLine } from './checklist-text.ts';
import { figureLines } from './figures-text.ts';
import { gainsLine } from './gains-text.ts';
import { hanging, heading } from './page.ts';

/** A page to be told on: whose mechanism, how wide, how drawn. */
export interface TrialPage {
  readonly profile: Profile;
  readonly width: number;
  readonly style: Style;
}

/** Rows of a trial's chart, axes and legend included: a trial's chart and figures fit an 80 × 24 screen together. */
const CHART_ROWS = 15;

/** What is about to be tried, why, and what to expect. */
export function proposalText(proposal: Proposal, trial: number, page: TrialPage): string {
  const { profile, width, style } = page;
  const line = (label: string, text: string) => hanging(label, text, width);
  return [
    heading(`Trial ${trial} · ${proposal.stage}`, width, style),
    line('Gains', gainsLine(proposal.gains, profile)),
    line('Move', trialLine(proposal, profile)),
    line('Why', proposal.why),
    ...(proposal.boundedBy === null ? [] : [line('Held by', `${proposal.boundedBy}.`)]),
    line('Promise', proposal.expect),
    line('Watch', proposal.unless),
  ].join('\n');
}

/** What came of a trial: chart with the promised band, figures against the target, verdicts. */
export function readingText(record: TrialRecord, reading: TrialReading, page: TrialPage): string {
  const { profile, width, style } = page;
  const chart = trialChart(record.samples, {
    title: `Trial ${record.trial}: measured against setpoint, and the band that was promised`,
    unit: profile.unit,
    band: record.band,
    tolerance: profile.target.tolerance,
    to: record.move.to,
    width,
    height: CHART_ROWS,
    span: null,
  });
  return [
    ...drawChart(chart, style),
    '',
    ...figureLines(reading.figures, profile, record.stage === 'ready' ? 'nothing' : 'target'),
    '',
    ...verdictLines(reading, width),
    bandLine(reading, record.stage === 'ready' ? '' : ' This move meets the target.', width),
  ].join('\n');
}

function verdictLines(reading: TrialReading, width: number): readonly string[] {
  if (reading.verdicts.length === 0) return [hanging('Verdict', 'nothing out of the ordinary', width)];
  return reading.verdicts.map(({ is, because }, k) => hanging(k === 0 ? 'Verdict' : '', `${is}: ${because}`, width));
}

function bandLine({ inBand, meets }: TrialReading, praise: string, width: number): string {
  const kept =
    inBand === null
      ? 'No band was promised.'
      : inBand
        ? 'It kept to the band it was promised.'
        : 'It left the band it was promised: that is news, and the model is trusted less.';
  return hanging('Band', `${kept}${meets ? praise : ''}`, width);
}

/** How the run ended, the gains to hold, and how sure they are. */
export function outcomeText(outcome: Outcome, trials: number, page: TrialPage): string {
  const { profile, width, style } = page;
  const count = `${trials} ${trials === 1 ? 'trial' : 'trials'}`;
  const verb = outcome.met ? 'Target met' : `Target not met: ${outcome.stopped}`;
  return [
    heading(`${verb} after ${count}`, width, style),
    hanging('Gains', provenLine(outcome, profile), width),
    hanging('Why', outcome.why, width),
    ...(outcome.margins === null ? [] : [hanging('Margins', marginsLine(outcome.margins), width)]),
  ].join('\n');
}

function provenLine({ met, gains }: Outcome, profile: Profile): string {
  const none = gains.kp === 0 && gains.ki === 0 && gains.kd === 0;
  return !met && none ? 'none were proven' : gainsLine(gains, profile);
}

/** Loop margins in one line. */
export function marginsLine({ gain, phase, delay, maxSensitivity }: Margins): string {
  const number = (value: number | null, unit: string, digits = 3) =>
    value === null ? 'no limit' : `${formatNumber(value, digits)}${unit}`;
  return `gain × ${number(gain, '')} · phase ${number(phase, '°')} · ${number(delay === null ? null : 1000 * delay, ' ms')} of delay · largest sensitivity ${formatNumber(maxSensitivity, 3)}`;
}
