import type { ChartSpec, Line } from '../../src/chart/spec.ts';
import { trialChart } from '../../src/chart/trial-chart.ts';
import type { Band } from '../../src/record/band.ts';
import type { Samples } from '../../src/record/samples.ts';

export const PLAIN = { colour: false, unicode: false } as const;
export const MONO = { colour: false, unicode: true } as const;
export const COLOUR = { colour: true, unicode: true } as const;

export function line(role: Line['role'], time: readonly number[], value: readonly number[], name: string = role): Line {
  return { name, role, time: Float64Array.from(time), value: Float64Array.from(value) };
}

export function spec(lines: readonly Line[], size: Partial<ChartSpec> = {}): ChartSpec {
  return { title: 'chart', unit: 'm', lines, width: 60, height: 16, range: null, span: null, ...size };
}

/** Seconds from 0 in even steps. */
export const seconds = (count: number, step = 0.02) => Array.from({ length: count }, (_, k) => k * step);

/** Unit step of a second-order system, ζ < 1, in closed form. */
export function secondOrder(t: number, dampingRatio: number, naturalFrequency: number): number {
  const root = Math.sqrt(1 - dampingRatio ** 2);
  const decay = Math.exp(-dampingRatio * naturalFrequency * t);
  const damped = naturalFrequency * root;
  return 1 - decay * (Math.cos(damped * t) + (dampingRatio / root) * Math.sin(damped * t));
}

/** A made-up lift's move from 0.2 m to 1.0 m: a second-order course, output and parts that go with it, and a promised band. */
export function madeTrial(): { readonly samples: Samples; readonly band: Band } {
  const time = Float64Array.from(seconds(126));
  const at = (scale: number, t: number) => 0.2 + 0.8 * secondOrder(t * scale, 0.45, 6);
  const measured = time.map((t) => at(1, t));
  const p = measured.map((y) => 1.2 * (1 - y));
  const i = time.map((t) => 0.05 * (1 - Math.exp(-t)));
  const d = time.map((t) => -0.04 * ((at(1, t + 0.01) - at(1, t - 0.01)) / 0.02));
  const output = p.map((value, row) => Math.min(1, Math.max(-1, value + (i[row] ?? 0) + (d[row] ?? 0))));
  const samples: Samples = {
    time,
    setpoint: new Float64Array(time.length).fill(1),
    measured,
    output,
    supply: null,
    current: null,
    enabled: null,
    parts: { p, i, d },
  };
  const spread = (scale: number, side: number) => time.map((t) => at(scale, t) + side * 0.03);
  const band = { time, low: spread(0.92, -1), middle: measured, high: spread(1.08, 1) };
  const low = band.low.map((value, row) => Math.min(value, band.high[row] ?? 0));
  const high = band.high.map((value, row) => Math.max(value, band.low[row] ?? 0));
  return { samples, band: { ...band, low, high } };
}

export function madeChart(width: number, height: number): ChartSpec {
  const { samples, band } = madeTrial();
  const options = { title: 'Trial 3: measured against setpoint', unit: 'm', tolerance: 0.05, to: 1 };
  return trialChart(samples, { ...options, band, width, height, span: null });
}
