import type { ControllerSettings, OutputUnit } from '../controller/settings.ts';
import { NO_GAINS } from '../controller/settings.ts';
import { knownUnit } from '../log/headers.ts';
import type { LogReading } from '../log/read.ts';
import type { Kind, Profile, Unit } from '../mechanism/profile.ts';
import { unitScale } from '../mechanism/units.ts';

/** A profile made from nothing but a log, and what had to be assumed for it. */
export interface PlainProfile {
  readonly profile: Profile;
  /** False = neither the log nor the person named the unit: texts say "units". */
  readonly unitNamed: boolean;
  readonly assumed: readonly string[];
}

/** Half-width of the band without a target, as a share of the largest move; the usual 2 % of the trade. */
const USUAL_TOLERANCE = 0.02;
/** Overshoot without a target, %; common practice, no source. */
const USUAL_OVERSHOOT = 5;
/** Stands in where no unit is named; {@link unitlessText} takes it out of texts again. */
const STAND_IN: Unit = 'rad';

/**
 * What can be said of a mechanism from a log alone, so that figures and verdicts can be worked out: its unit and quantity from
 * the header, the output's unit from its header or size, the sensor's step from the readings, the trade's usual target.
 *
 * @param said the unit that a person gave for the readings, or null
 */
export function plainProfile(reading: LogReading, said: Unit | null, saidOutput: OutputUnit | null): PlainProfile {
  const inHeader = reading.columns.measured?.unit ?? null;
  const named = said ?? (inHeader === null ? null : knownUnit(inHeader));
  const unit = named ?? STAND_IN;
  const header = reading.columns.measured?.header ?? '';
  const perSecond = named === null ? /speed|vel|rpm/i.test(header) : unitScale(named).perSecond;
  const largest = Math.max(1e-12, ...movesOf(reading).map(([from, to]) => Math.abs(to - from)));
  const longest = Math.max(0, ...reading.moves.map(({ samples }) => samples.time.at(-1) ?? 0)) || reading.duration;
  const output = outputOf(reading, saidOutput);
  const profile: Profile = {
    format: 'holdfast/profile@1',
    name: 'log',
    title: reading.file,
    kind: kindOf(unit, perSecond),
    quantity: perSecond ? 'speed' : 'position',
    unit,
    continuous: null,
    motor: null,
    drive: null,
    load: null,
    friction: null,
    supply: null,
    sensor: { resolution: stepOf(reading.samples.measured), noise: 0, delay: 0 },
    limits: { min: null, max: null, outputCap: 1 },
    controller: { ...PLAIN_CONTROLLER, period: reading.period, output },
    target: {
      tolerance: USUAL_TOLERANCE * largest,
      overshoot: USUAL_OVERSHOOT,
      settlingTime: longest,
      moves: movesOf(reading),
    },
    gains: NO_GAINS,
    hazards: [],
    notes: '',
  };
  const assumed = [
    `No profile was given: settled means within 2 % of the largest move, and ${USUAL_OVERSHOOT} % overshoot is allowed.`,
    ...(reading.samples.output === null ? [] : [`Output is taken as ${output.unit}, ${output.min} to ${output.max}.`]),
  ];
  return { profile, unitNamed: named !== null, assumed };
}

/** The moves of a log; of one without a setpoint, the whole range it covered. */
function movesOf({ moves, samples }: LogReading): readonly (readonly [from: number, to: number])[] {
  if (moves.length > 0) return moves.map(({ from, to }) => [from, to]);
  let low = Number.POSITIVE_INFINITY;
  let high = Number.NEGATIVE_INFINITY;
  for (const value of samples.measured) {
    low = Math.min(low, value);
    high = Math.max(high, value);
  }
  return [[low, high]];
}

/** A text about a log without a unit: the stand-in becomes "units". */
export function unitlessText(text: string): string {
  return text.replaceAll(/(\d) rad(\/s)?\b/g, '$1 units$2');
}

const PLAIN_CONTROLLER: Omit<ControllerSettings, 'period' | 'output'> = {
  timeBase: 'seconds',
  form: 'parallel',
  derivativeOn: 'error',
  derivativeFilter: 0,
  outsideZone: 'hold',
  sumLimit: null,
  slew: null,
};

function kindOf(unit: Unit, perSecond: boolean): Kind {
  if (unitScale(unit).dimension === 'length') return 'travel';
  return perSecond ? 'spin' : 'turn';
}

/** The output's range: by the unit that is named, else by its size, since nobody's fraction passes 1.5 nor percent stays under it. */
function outputOf(reading: LogReading, said: OutputUnit | null): ControllerSettings['output'] {
  const text = reading.columns.output?.unit?.toLowerCase() ?? '';
  let largest = 0;
  for (const value of reading.samples.output ?? []) largest = Math.max(largest, Math.abs(value));
  const named: OutputUnit | null = /^v/.test(text) ? 'volts' : /%|pct|percent/.test(text) ? 'percent' : null;
  const unit = said ?? named ?? (largest <= 1.5 ? 'fraction' : largest <= 16 ? 'volts' : 'percent');
  const full = unit === 'fraction' ? 1 : unit === 'percent' ? 100 : Math.max(12, Math.ceil(largest));
  return { unit, min: -full, max: full };
}

/** The smallest change between rows that follow each other: one step of the sensor, where it has steps; 0 where nothing changes. */
function stepOf(measured: Float64Array): number {
  let least = Number.POSITIVE_INFINITY;
  for (let row = 1; row < measured.length; row += 1) {
    const change = Math.abs((measured[row] ?? 0) - (measured[row - 1] ?? 0));
    if (change > 0 && change < least) least = change;
  }
  return Number.isFinite(least) ? Number(least.toPrecision(3)) : 0;
}
