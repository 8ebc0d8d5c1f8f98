import type { Gains } from '../controller/settings.ts';
import type { Move, Profile } from '../mechanism/profile.ts';
import type { Draw } from './draws.ts';
import type { Rehearsal } from './rehearsal.ts';

/** Share of draws that must stay inside the travel limits with no growing swing; design's safety, Gate (3). */
const SAFE_SHARE = 0.99;

/** What a trial does at its worst over the draws. */
export interface SafetyCheck {
  readonly safe: boolean;
  /** What broke, in words; null when safe. */
  readonly why: 'limits' | 'growing-swing' | null;
  /** Share of the rehearsals that leave the travel limits, and that swing wider and wider; what the gate asks for. */
  readonly outside: number;
  readonly growing: number;
}

/** Rehearses a trial over all draws, with the stops taken away so that leaving the limits shows. */
export function checkSafety(
  profile: Profile,
  draws: readonly Draw[],
  rehearsal: Rehearsal,
  trial: { readonly gains: Gains; readonly move: Move; readonly outputCap: number },
): SafetyCheck {
  let outside = 0;
  let growing = 0;
  for (const draw of draws) {
    const free = { ...draw.plant, stops: { min: null, max: null } };
    const quick = rehearsal.run(free, trial.gains, trial.move, trial.outputCap);
    if (quick.growing) growing++;
    const { columns, rows } = rehearsal.last();
    if (profile.quantity === 'position' && leaves(columns.measured, rows, profile, trial.move)) outside++;
  }
  const allowed = (1 - SAFE_SHARE) * draws.length;
  const why = outside > allowed ? 'limits' : growing > allowed ? 'growing-swing' : null;
  const count = Math.max(1, draws.length);
  return { safe: why === null, why, outside: outside / count, growing: growing / count };
}

function leaves(measured: Float64Array, rows: number, profile: Profile, move: Move): boolean {
  // A move that starts or ends on a limit may sit on it; the tolerance is what it may lean out by.
  const { tolerance } = profile.target;
  const min = profile.limits.min === null ? Number.NEGATIVE_INFINITY : Math.min(profile.limits.min, move.from, move.to);
  const max = profile.limits.max === null ? Number.POSITIVE_INFINITY : Math.max(profile.limits.max, move.from, move.to);
  for (let row = 0; row < rows; row++) {
    const at = measured[row] ?? 0;
    if (at < min - tolerance || at > max + tolerance) return true;
  }
  return false;
}

/**
 * Backs gains off until the rehearsal is safe: each time Kp by a fifth, Ki by two, Kd by a tenth.
 *
 * @returns the first safe set, or null when none of them is
 */
export function makeSafe(
  profile: Profile,
  draws: readonly Draw[],
  rehearsal: Rehearsal,
  trial: { readonly gains: Gains; readonly move: Move; readonly outputCap: number },
): { readonly gains: Gains; readonly bounded: SafetyCheck['why'] } | null {
  let gains = trial.gains;
  let bounded: SafetyCheck['why'] = null;
  for (let round = 0; round < 14; round++) {
    const check = checkSafety(profile, draws, rehearsal, { ...trial, gains });
    if (check.safe) return { gains, bounded };
    bounded = check.why;
    gains = { ...gains, kp: gains.kp * 0.8, ki: gains.ki * 0.6, kd: gains.kd * 0.9 };
  }
  return null;
}
