import { join } from 'node:path';
import { expect, test } from 'vitest';
import { drawChart, stackCharts } from '../../src/chart/draw.ts';
import { outputChart, promiseChart } from '../../src/chart/trial-chart.ts';
import { MONO, madeChart, madeTrial, PLAIN } from './made.ts';

// Charts as they are seen; look at the difference before you take a new one:
//   npx vitest run --project unit test/chart -u && git diff test/golden
const golden = (name: string) => join(import.meta.dirname, '../golden', `${name}.txt`);
const sheet = (rows: readonly string[]) => `${rows.join('\n')}\n`;

function output(width: number, height: number) {
  const chart = outputChart(madeTrial().samples, { unit: 'of full', width, height, span: null });
  if (chart === null) throw new Error('the made trial has an output');
  return chart;
}

test('a trial with its promised band on 80 columns', async () => {
  await expect(sheet(drawChart(madeChart(80, 15), MONO))).toMatchFileSnapshot(golden('chart-trial-80'));
});

test('the same in plain ASCII', async () => {
  await expect(sheet(drawChart(madeChart(80, 15), PLAIN))).toMatchFileSnapshot(golden('chart-trial-80-ascii'));
});

test('a trial over its output on 80 × 23 with a cursor', async () => {
  const rows = stackCharts({ ...madeChart(80, 13), cursor: 0.42 }, output(80, 10), MONO);
  await expect(sheet(rows)).toMatchFileSnapshot(golden('chart-stacked-80'));
});

test('the same on 120 × 39', async () => {
  const rows = stackCharts({ ...madeChart(120, 23), cursor: 0.42 }, output(120, 16), MONO);
  await expect(sheet(rows)).toMatchFileSnapshot(golden('chart-stacked-120'));
});

test('a promise before its trial', async () => {
  const options = { title: 'What to expect', unit: 'm', band: null, tolerance: 0.05, to: 1, span: null };
  const rows = drawChart(promiseChart(madeTrial().band, { ...options, width: 80, height: 15 }), MONO);
  await expect(sheet(rows)).toMatchFileSnapshot(golden('chart-promise-80'));
});
