import type { ChartSpec, Line } from '../chart/spec.ts';
import type { Profile } from '../mechanism/profile.ts';
import type { Band } from '../record/band.ts';
import type { Samples } from '../record/samples.ts';

/** What a chart of one move or log is drawn from. */
export interface TrialPicture {
  readonly title: string;
  readonly samples: Samples;
  readonly profile: Profile;
  readonly band: Band | null;
  /** Unit as the axis names it. */
  readonly unit: string;
  readonly width: number;
  readonly height: number;
}

/** Setpoint and measured with the target's tolerance and the band that was promised. */
export function responseChart(picture: TrialPicture): ChartSpec {
  const { samples, profile, band } = picture;
  const { time, setpoint, measured } = samples;
  const { tolerance } = profile.target;
  const lines: Line[] = [
    { name: 'tolerance', time, value: setpoint.map((value) => value - tolerance), role: 'tolerance' },
    { name: 'tolerance', time, value: setpoint.map((value) => value + tolerance), role: 'tolerance' },
    ...(band === null ? [] : bandLines(band)),
    { name: 'setpoint', time, value: setpoint, role: 'setpoint' },
    { name: 'measured', time, value: measured, role: 'measured' },
  ];
  const { title, unit, width, height } = picture;
  return { title, unit, lines, width, height, range: null, span: null };
}

function bandLines({ time, low, high }: Band): readonly Line[] {
  return [
    { name: 'band', time, value: low, role: 'band' },
    { name: 'band', time, value: high, role: 'band' },
  ];
}

const OUTPUT_AXIS = { fraction: 'of full', percent: '%', volts: 'V' } as const;

/** The output over the same time; null when the log has none. */
export function outputChart(picture: TrialPicture): ChartSpec | null {
  const { samples, profile, width, height } = picture;
  if (samples.output === null) return null;
  const { unit, min, max } = profile.controller.output;
  return {
    title: 'Output',
    unit: OUTPUT_AXIS[unit],
    lines: [{ name: 'output', time: samples.time, value: samples.output, role: 'output' }],
    width,
    height,
    range: [min, max],
    span: null,
  };
}
