import { drawChart } from '../chart/draw.ts';
import { trialChart } from '../chart/trial-chart.ts';
import type { TrialReading, TrialRecord } from '../coach/step.ts';
import type { Profile } from '../mechanism/profile.ts';
import { figuresTable } from '../report/figures.ts';
import { hanging, type Page } from '../report/page.ts';
import { verdictLines } from '../report/verdicts.ts';

/** Rows of a trial's chart, axes and legend included: a trial's chart and figures fit an 80 × 24 screen together. */
export const CHART_ROWS = 15;

/** What came of a trial: chart with the promised band, figures against the target, verdicts. */
export function readingText(record: TrialRecord, reading: TrialReading, profile: Profile, page: Page): string {
  const chart = trialChart(record.samples, {
    title: `Trial ${record.trial}: measured against setpoint, and the band that was promised`,
    unit: profile.unit,
    band: record.band,
    tolerance: profile.target.tolerance,
    to: record.move.to,
    width: page.width,
    height: CHART_ROWS,
    span: null,
  });
  // The direction check is not asked to meet the target: it is cut short by its output cap.
  const isCheck = record.stage === 'ready';
  return [
    ...drawChart(chart, page.style),
    '',
    figuresTable(reading.figures, profile, isCheck ? 'nothing' : 'target', page),
    '',
    verdictLines(reading.verdicts, page),
    ...hanging('Band', bandText(reading, isCheck), page),
  ].join('\n');
}

function bandText({ inBand, meets }: TrialReading, isCheck: boolean): string {
  const praise = meets && !isCheck ? ' This move meets the target.' : '';
  if (inBand === null) return `No band was promised.${praise}`;
  if (inBand) return `It kept to the band it was promised.${praise}`;
  return `It left the band it was promised: that is news, and the model is trusted less.${praise}`;
}
