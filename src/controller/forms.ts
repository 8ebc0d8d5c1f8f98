import {
  type ControllerSettings,
  fullOutput,
  type GainForm,
  type Gains,
  type OutputUnit,
  type TimeBase,
} from './settings.ts';

/** How a person's controller writes its gains. */
export interface Convention {
  readonly form: GainForm;
  readonly timeBase: TimeBase;
  readonly outputUnit: OutputUnit;
  /** Full output in `outputUnit`: 1, 100, or the volts of full output. */
  readonly fullOutput: number;
  /** s between ticks. */
  readonly period: number;
}

/** Gains as they are entered. Which terms there are depends on the form. */
export type EnteredGains =
  | {
      readonly form: 'parallel';
      readonly kp: number;
      readonly ki: number;
      readonly kd: number;
      readonly zone: number | null;
      readonly hold: number;
      readonly pace: number;
    }
  | {
      readonly form: 'standard' | 'series';
      readonly gain: number;
      /** In s or ticks; null = no integral. */
      readonly integralTime: number | null;
      readonly derivativeTime: number;
      readonly zone: number | null;
      readonly hold: number;
      readonly pace: number;
    };

/** Gains that a form cannot express. */
export class NoEquivalent extends Error {
  readonly remedy: string;

  constructor(what: string, remedy: string) {
    super(what);
    this.name = 'NoEquivalent';
    this.remedy = remedy;
  }
}

/** The convention of a profile's own controller. */
export function conventionOf(settings: ControllerSettings): Convention {
  return {
    form: settings.form,
    timeBase: settings.timeBase,
    outputUnit: settings.output.unit,
    fullOutput: fullOutput(settings),
    period: settings.period,
  };
}

/**
 * Canonical gains as another convention writes them.
 *
 * @param canonicalFull full output in the unit of the canonical gains
 * @throws {NoEquivalent} standard and series forms without Kp; series form with Ti < 4·Td
 * Source: Åström & Hägglund, PID Controllers (1995), ch. 3, the three forms and their conversion (mem).
 */
export function toConvention(gains: Gains, canonicalFull: number, to: Convention): EnteredGains {
  const scale = to.fullOutput / canonicalFull;
  const { zone } = gains;
  const hold = gains.hold * scale;
  const pace = gains.pace * scale;
  const ticks = to.timeBase === 'ticks' ? to.period : 1;
  if (to.form === 'parallel') {
    // Code that leaves out dt sums errors and differences them a tick: Ki·T and Kd/T.
    return {
      form: 'parallel',
      kp: gains.kp * scale,
      ki: gains.ki * scale * ticks,
      kd: (gains.kd * scale) / ticks,
      zone,
      hold,
      pace,
    };
  }
  if (gains.kp === 0) {
    if (gains.ki !== 0 || gains.kd !== 0) {
      throw new NoEquivalent(
        `The ${to.form} form multiplies all terms by one gain: with Kp 0 it has no Ki and no Kd.`,
        'Use the parallel form.',
      );
    }
    return { form: to.form, gain: 0, integralTime: null, derivativeTime: 0, zone, hold, pace };
  }
  const standard = {
    gain: gains.kp * scale,
    integral: gains.ki === 0 ? null : gains.kp / gains.ki,
    derivative: gains.kd / gains.kp,
  };
  const times = to.form === 'series' ? seriesOf(standard) : standard;
  return {
    form: to.form,
    gain: times.gain,
    integralTime: times.integral === null ? null : times.integral / ticks,
    derivativeTime: times.derivative / ticks,
    zone,
    hold,
    pace,
  };
}

interface Times {
  readonly gain: number;
  /** s; null = no integral. */
  readonly integral: number | null;
  readonly derivative: number;
}

/** Standard to series: real only when Ti ≥ 4·Td. */
function seriesOf({ gain, integral, derivative }: Times): Times {
  if (integral === null || derivative === 0) return { gain, integral, derivative };
  const under = 1 - (4 * derivative) / integral;
  if (under < 0) {
    throw new NoEquivalent(
      `The series form needs an integral time of at least four times the derivative time; here it is ${(integral / derivative).toPrecision(3)} times.`,
      'Use the parallel or standard form, or gains with less Ki or Kd.',
    );
  }
  const factor = 0.5 * (1 + Math.sqrt(under));
  return { gain: gain * factor, integral: integral * factor, derivative: derivative / factor };
}

/** Gains as entered in a convention, back as canonical ones in the unit whose full output is `canonicalFull`. */
export function fromConvention(entered: EnteredGains, canonicalFull: number, from: Convention): Gains {
  const scale = canonicalFull / from.fullOutput;
  const ticks = from.timeBase === 'ticks' ? from.period : 1;
  const rest = { zone: entered.zone, hold: entered.hold * scale, pace: entered.pace * scale };
  if (entered.form === 'parallel') {
    return { kp: entered.kp * scale, ki: (entered.ki * scale) / ticks, kd: entered.kd * scale * ticks, ...rest };
  }
  const integral = entered.integralTime === null ? null : entered.integralTime * ticks;
  const derivative = entered.derivativeTime * ticks;
  // Series: K(1 + 1/(Ti·s))(1 + Td·s) multiplied out.
  const factor = entered.form === 'series' && integral !== null ? 1 + derivative / integral : 1;
  const kp = entered.gain * scale * factor;
  return {
    kp,
    ki: integral === null ? 0 : (entered.gain * scale) / integral,
    kd: entered.gain * scale * derivative,
    ...rest,
  };
}

/** One number to enter: what it is called, its value and its unit. */
export interface GainLine {
  readonly label: string;
  readonly value: number | null;
  readonly unit: string;
}

const UNIT_WORD: Readonly<Record<OutputUnit, string>> = { fraction: '', percent: '%', volts: 'V' };

/** The lines a person enters, in order, with units; terms that are off are left out but for the main ones. */
export function gainLines(entered: EnteredGains, convention: Convention, measuredUnit: string): readonly GainLine[] {
  const out = UNIT_WORD[convention.outputUnit];
  const per = (unit: string) => `${out === '' ? '1' : out}/${unit}`;
  const time = convention.timeBase === 'ticks' ? 'tick' : 's';
  const main: readonly GainLine[] =
    entered.form === 'parallel'
      ? [
          { label: 'Kp', value: entered.kp, unit: per(measuredUnit) },
          { label: 'Ki', value: entered.ki, unit: `${per(measuredUnit)}/${time}` },
          { label: 'Kd', value: entered.kd, unit: `${per(measuredUnit)}·${time}` },
        ]
      : [
          { label: 'K', value: entered.gain, unit: per(measuredUnit) },
          { label: 'Ti', value: entered.integralTime, unit: time },
          { label: 'Td', value: entered.derivativeTime, unit: time },
        ];
  const extra: GainLine[] = [];
  if (entered.zone !== null) extra.push({ label: 'zone', value: entered.zone, unit: measuredUnit });
  if (entered.hold !== 0) extra.push({ label: 'hold', value: entered.hold, unit: out });
  if (entered.pace !== 0) extra.push({ label: 'pace', value: entered.pace, unit: per(measuredUnit) });
  return [...main, ...extra];
}
