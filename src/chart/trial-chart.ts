import type { Band } from '../record/band.ts';
import type { Samples } from '../record/samples.ts';
import type { ChartSpec, Line } from './spec.ts';

export interface TrialChartOptions {
  readonly title: string;
  readonly unit: string;
  readonly band: Band | null;
  readonly tolerance: number | null;
  readonly to: number;
  readonly width: number;
  readonly height: number;
  readonly span: readonly [number, number] | null;
}

/** Setpoint and measured of a trial, with the tolerance about the target and the band it was promised. */
export function trialChart(samples: Samples, options: TrialChartOptions): ChartSpec {
  const { time } = samples;
  const lines: Line[] = [];
  if (options.tolerance !== null) {
    const flat = (value: number): Line => ({
      name: 'tolerance',
      role: 'tolerance',
      time,
      value: new Float64Array(time.length).fill(value),
    });
    lines.push(flat(options.to - options.tolerance), flat(options.to + options.tolerance));
  }
  if (options.band !== null) lines.push(...bandLines(options.band));
  lines.push({ name: 'setpoint', role: 'setpoint', time, value: samples.setpoint });
  lines.push({ name: 'measured', role: 'measured', time, value: samples.measured });
  return {
    title: options.title,
    unit: options.unit,
    lines,
    width: options.width,
    height: options.height,
    range: null,
    span: options.span,
  };
}

/** The two edges of a band. */
function bandLines(band: Band): readonly Line[] {
  return [
    { name: 'promised, 9 times in 10', role: 'band', time: band.time, value: band.low },
    { name: 'promised, 9 times in 10', role: 'band', time: band.time, value: band.high },
  ];
}

/** A promise alone: the band with the middle course in it. */
export function promiseChart(band: Band, options: TrialChartOptions): ChartSpec {
  const flat = (value: number): Line => ({
    name: 'tolerance',
    role: 'tolerance',
    time: band.time,
    value: new Float64Array(band.time.length).fill(value),
  });
  const tolerance =
    options.tolerance === null ? [] : [flat(options.to - options.tolerance), flat(options.to + options.tolerance)];
  return {
    title: options.title,
    unit: options.unit,
    lines: [
      ...tolerance,
      ...bandLines(band),
      { name: 'most likely', role: 'measured', time: band.time, value: band.middle },
    ],
    width: options.width,
    height: options.height,
    range: null,
    span: options.span,
  };
}

/** Output of a trial with its three parts; null when the log has no output. */
export function outputChart(
  samples: Samples,
  options: Pick<TrialChartOptions, 'width' | 'height' | 'span'> & { readonly unit: string },
): ChartSpec | null {
  const { time, output, parts } = samples;
  if (output === null) return null;
  const lines: Line[] = [{ name: 'output', role: 'output', time, value: output }];
  if (parts !== null) {
    const part = (name: string, role: Line['role'], value: Float64Array): Line => ({ name, role, time, value });
    const all = [part('P part', 'p', parts.p), part('I part', 'i', parts.i), part('D part', 'd', parts.d)];
    // A term that is off would only hide the axis.
    lines.unshift(...all.filter(({ value }) => value.some((one) => one !== 0)));
  }
  const size = output.reduce((most, value) => Math.max(most, Math.abs(value)), 0) || 1;
  return {
    title: 'output',
    unit: options.unit,
    lines,
    width: options.width,
    height: options.height,
    // Parts may be many times what the output is limited to: they show as beyond it, on the edge.
    range: [-1.4 * size, 1.4 * size],
    span: options.span,
  };
}
