// How long a screen of two charts takes to redraw, against asciichart alone on one series resampled beforehand (the least that
// any drawing with it costs). Medians of 200 interleaved redraws after 50 to warm up. Run: npx tsx test/bench/chart.ts
import asciichart from 'asciichart';
import { stackCharts } from '../../src/chart/draw.ts';
import { resample } from '../../src/chart/resample.ts';
import { outputChart } from '../../src/chart/trial-chart.ts';
import { COLOUR, madeChart, madeTrial } from '../chart/made.ts';

const { samples } = madeTrial();
const median = (values: number[]) => values.sort((a, b) => a - b)[Math.floor(values.length / 2)] ?? Number.NaN;

function milliseconds(work: () => unknown): number {
  const start = process.hrtime.bigint();
  work();
  return Number(process.hrtime.bigint() - start) / 1e6;
}

for (const [width, rows] of [
  [80, 23],
  [120, 39],
  [200, 59],
] as const) {
  const upper = { ...madeChart(width, Math.ceil(0.6 * rows)), cursor: 0.42 };
  const lower = outputChart(samples, { unit: 'of full', width, height: Math.floor(0.4 * rows), span: null });
  if (lower === null) throw new Error('the made trial has an output');
  const { value } = resample(samples.time, samples.measured, [0, 2.5], width - 8);
  const both: number[] = [];
  const bare: number[] = [];
  for (let round = 0; round < 250; round++) {
    const two = milliseconds(() => stackCharts(upper, lower, COLOUR));
    const one = milliseconds(() => asciichart.plot([...value], { height: upper.height - 5, min: 0, max: 1.2 }));
    if (round < 50) continue;
    both.push(two);
    bare.push(one);
  }
  const [two, one] = [median(both), median(bare)];
  console.log(
    `${width} × ${rows}: two charts, 10 lines, ${samples.time.length} rows of log: ${two.toFixed(2)} ms, ${(two / one).toFixed(1)} × asciichart's one bare curve (${one.toFixed(3)} ms)`,
  );
}
