import { rebuildOutput } from '../controller/rebuild.ts';
import { fullOutput } from '../controller/settings.ts';
import { gravityOf } from '../mechanism/plant-of.ts';
import type { Profile } from '../mechanism/profile.ts';
import type { Start } from '../plant/motion.ts';
import { type Samples, sliceSamples } from '../record/samples.ts';
import type { TrialEvidence } from './learnt.ts';
import { filled, informationOf, smallestStep, unwrapped } from './readings.ts';

/** One trial made ready for the fit: what drove it, as fractions of full output, and what was measured, unwrapped. */
export interface Drive {
  readonly quantity: Profile['quantity'];
  readonly time: Float64Array;
  /** Fraction of full output at nominal supply. */
  readonly output: Float64Array;
  readonly measured: Float64Array;
  /** What each row's reading is worth, 0 to 1; nil where there was none. */
  readonly information: Float64Array;
  readonly start: Start;
  /** One sigma of the start's position (of a speed log, its speed); 0 = it is known. */
  readonly startError: number;
  /** Deviation of a reading that the sensor's step and noise explain, unit of `measured`. */
  readonly floor: number;
  /** Rows without a number for the reading or the output. */
  readonly missing: number;
  /** True when the log had no output and it was rebuilt from the gains. */
  readonly rebuilt: boolean;
  /** True when the logged supply was used, so that the plant must not sag by itself. */
  readonly supplied: boolean;
}

/** Why a trial can teach nothing. */
export type Unusable =
  | 'too short'
  | 'time goes back'
  | 'no output and no gains'
  | 'not finite'
  | 'never driven'
  | 'never moved';

const LEAST_ROWS = 8;
/** Share of rows that may lack a number before a trial is not believed. */
const MOST_MISSING = 0.2;

/** Makes a trial ready for the fit, or says why it cannot be used. */
export function driveOf(evidence: TrialEvidence, profile: Profile): Drive | Unusable {
  const samples = whileEnabled(evidence.samples);
  const { time } = samples;
  if (time.length < LEAST_ROWS) return 'too short';
  if (!increases(time)) return 'time goes back';
  const read = filled(samples.measured);
  const sent = samples.output === null ? null : filled(samples.output);
  const mostMissing = MOST_MISSING * time.length;
  if (read === null || read.missing > mostMissing) return 'not finite';
  const rebuilt = sent === null;
  const output = sent?.values ?? rebuiltOutput(evidence, samples, read.values, profile);
  if (output === null) return 'no output and no gains';
  if ((sent?.missing ?? 0) > mostMissing || !output.every(Number.isFinite)) return 'not finite';
  if (output.every((value) => value === 0)) return 'never driven';
  if (read.values.every((value) => value === read.values[0])) return 'never moved';

  const quantity = evidence.quantity ?? profile.quantity;
  const measured = quantity === 'position' ? unwrapped(read.values, profile.continuous) : read.values;
  const { factors, supplied } = supplyFactors(samples, profile);
  const full = fullOutput(profile.controller);
  const { step, floor } = sensorFloor(measured, quantity, profile);
  const start = startOf(time, measured, quantity, Math.max(step, 3 * floor), evidence);
  return {
    quantity,
    time,
    output: output.map((value, row) => (value / full) * (factors?.[row] ?? 1)),
    measured,
    information: informationOf(samples.measured, measured, Math.max(step, floor)),
    start,
    startError: quantity === 'speed' && start.speed === 0 ? 0 : floor,
    floor,
    missing: read.missing + (sent?.missing ?? 0),
    rebuilt,
    supplied,
  };
}

/** The longest stretch in which the machine was enabled; all of it when the log does not say. */
function whileEnabled(samples: Samples): Samples {
  const { enabled, time } = samples;
  if (enabled === null) return samples;
  let longest = { start: 0, end: 0 };
  for (let row = 0, start = 0; row <= time.length; row++) {
    if (row < time.length && (enabled[row] ?? 1) > 0.5) continue;
    if (row - start > longest.end - longest.start) longest = { start, end: row };
    start = row + 1;
  }
  return sliceSamples(samples, longest.start, longest.end);
}

function increases(time: Float64Array): boolean {
  for (let row = 1; row < time.length; row++) if (!((time[row] ?? 0) >= (time[row - 1] ?? 0))) return false;
  return Number.isFinite(time[0]) && Number.isFinite(time.at(-1));
}

function rebuiltOutput(
  evidence: TrialEvidence,
  samples: Samples,
  measured: Float64Array,
  profile: Profile,
): Float64Array | null {
  const { gains } = evidence;
  if (gains === null) return null;
  const loop = {
    settings: profile.controller,
    gains,
    quantity: profile.quantity,
    continuous: profile.continuous,
    holdShape: gravityOf(profile),
    outputCap: evidence.outputCap,
  };
  const { time, setpoint } = samples;
  const speed = gains.pace !== 0 && profile.quantity === 'position' ? shapedSpeed(time, setpoint) : null;
  return rebuildOutput(loop, time, setpoint, measured, speed).output;
}

/** Speed of a setpoint that moves gradually; nil across a step. */
function shapedSpeed(time: Float64Array, setpoint: Float64Array): Float64Array {
  const slope = (row: number): number => {
    const dt = (time[row] ?? 0) - (time[row - 1] ?? 0);
    return row > 0 && dt > 0 ? ((setpoint[row] ?? 0) - (setpoint[row - 1] ?? 0)) / dt : 0;
  };
  return time.map((_, row) => {
    const before = slope(row);
    const after = row + 1 < time.length ? slope(row + 1) : 0;
    return before === 0 || after === 0 ? 0 : 0.5 * (before + after);
  });
}

/** Logged supply over the nominal one, row by row; output in duty pulls as hard as the supply is high. */
function supplyFactors(
  { supply }: Samples,
  profile: Profile,
): { readonly factors: Float64Array | null; readonly supplied: boolean } {
  const nominal = profile.supply?.openCircuit ?? profile.motor?.nominalVoltage ?? null;
  const read = supply === null || nominal === null ? null : filled(supply);
  if (read === null || nominal === null || read.missing > MOST_MISSING * read.values.length) {
    return { factors: null, supplied: false };
  }
  return { factors: read.values.map((value) => value / nominal), supplied: true };
}

/** What the sensor alone explains. A speed logged of a position mechanism has no data sheet: its own smallest step is taken. */
function sensorFloor(
  measured: Float64Array,
  quantity: Profile['quantity'],
  profile: Profile,
): { readonly step: number; readonly floor: number } {
  const sensor = quantity === profile.quantity ? profile.sensor : null;
  const step = sensor?.resolution ?? smallestStep(measured);
  return { step, floor: Math.hypot(step / Math.sqrt(12), sensor?.noise ?? 0) };
}

/**
 * Where and how fast it was when the record begins. A trial of a known move began at rest; of other logs the first three
 * readings tell, to the second order, so that setting off from rest does not pass for motion.
 */
function startOf(
  time: Float64Array,
  measured: Float64Array,
  quantity: Profile['quantity'],
  noise: number,
  evidence: TrialEvidence,
): Start {
  const [first = 0, second = 0, third = 0] = measured;
  if (quantity === 'speed') {
    // A reading that noise explains is of a mechanism at rest: friction must not be told to slow it.
    return { position: evidence.move?.from ?? 0, speed: Math.abs(first) > noise ? first : 0 };
  }
  const dt = ((time[2] ?? 0) - (time[0] ?? 0)) / 2;
  const isTrial = evidence.move !== null && evidence.gains !== null;
  const moved = (-3 * first + 4 * second - third) / 2;
  const isMoving = !isTrial && dt > 0 && Math.abs(moved) > 4 * noise;
  return { position: first, speed: isMoving ? moved / dt : 0 };
}
