import { rebuildOutput } from '../controller/rebuild.ts';
import { fullOutput } from '../controller/settings.ts';
import { gravityOf } from '../mechanism/plant-of.ts';
import type { Move, Profile } from '../mechanism/profile.ts';
import type { TrialEvidence } from './learnt.ts';

/** One trial made ready for the fit: what drove it, as fractions of full output, and what was measured, unwrapped. */
export interface Drive {
  readonly time: Float64Array;
  /** Fraction of full output at nominal supply. */
  readonly output: Float64Array;
  readonly measured: Float64Array;
  readonly start: { readonly position: number; readonly speed: number };
  /** True when the log had no output and it was rebuilt from the gains. */
  readonly rebuilt: boolean;
  /** True when the logged supply was used, so that the plant must not sag by itself. */
  readonly supplied: boolean;
}

/** Why a trial can teach nothing. */
export type Unusable = 'too short' | 'no output and no gains' | 'not finite' | 'never driven' | 'never moved';

/** Makes a trial ready for the fit, or says why it cannot be used. */
export function driveOf(evidence: TrialEvidence, profile: Profile): Drive | Unusable {
  const { samples } = evidence;
  const rows = samples.time.length;
  if (rows < 8) return 'too short';
  const measured = unwrapped(samples.measured, profile.continuous);
  if (!allFinite(samples.time) || !allFinite(measured)) return 'not finite';
  const sent = samples.output ?? rebuiltOutput(evidence, profile);
  if (sent === null) return 'no output and no gains';
  if (!allFinite(sent)) return 'not finite';
  const full = fullOutput(profile.controller);
  const nominal = profile.supply?.openCircuit ?? null;
  const supply = samples.supply;
  const supplied = supply !== null && nominal !== null && allFinite(supply);
  const output = sent.map(
    (value, row) => (value / full) * (supplied && supply && nominal ? (supply[row] ?? nominal) / nominal : 1),
  );
  if (output.every((value) => value === 0)) return 'never driven';
  if (measured.every((value) => value === measured[0])) return 'never moved';
  return {
    time: samples.time,
    output,
    measured,
    start: startOf(samples.time, measured, profile),
    rebuilt: samples.output === null,
    supplied,
  };
}

function rebuiltOutput(evidence: TrialEvidence, profile: Profile): Float64Array | null {
  const { gains, samples } = evidence;
  if (gains === null) return null;
  const loop = {
    settings: profile.controller,
    gains,
    quantity: profile.quantity,
    continuous: profile.continuous,
    holdShape: gravityOf(profile),
    outputCap: evidence.outputCap,
  };
  return rebuildOutput(loop, samples.time, samples.setpoint, samples.measured).output;
}

/** Readings of a wrapping sensor as one continuous course. */
export function unwrapped(measured: Float64Array, width: number | null): Float64Array {
  if (width === null) return measured;
  const course = Float64Array.from(measured);
  let turns = 0;
  for (let row = 1; row < course.length; row++) {
    const jump = (measured[row] ?? 0) - (measured[row - 1] ?? 0);
    turns -= Math.round(jump / width);
    course[row] = (measured[row] ?? 0) + turns * width;
  }
  return course;
}

/** Where and how fast it was when the record begins: at rest unless the first samples say otherwise. */
function startOf(time: Float64Array, measured: Float64Array, profile: Profile): Drive['start'] {
  const first = measured[0] ?? 0;
  if (profile.quantity === 'speed') return { position: 0, speed: first };
  const noise = Math.max(profile.sensor?.resolution ?? 0, 3 * (profile.sensor?.noise ?? 0));
  const step = (measured[1] ?? first) - first;
  const dt = (time[1] ?? 0) - (time[0] ?? 0);
  const moving = Math.abs(step) > 2 * noise && dt > 0 && (time[0] ?? 0) !== 0;
  return { position: first, speed: moving ? step / dt : 0 };
}

/** The move a trial made, where it was told or its setpoint shows it. */
export function moveOf(evidence: TrialEvidence): Move {
  if (evidence.move !== null) return evidence.move;
  const { setpoint, measured } = evidence.samples;
  return { from: measured[0] ?? 0, to: setpoint.at(-1) ?? 0 };
}

function allFinite(values: Float64Array): boolean {
  for (const value of values) if (!Number.isFinite(value)) return false;
  return true;
}
