import { fullOutput, type Gains } from '../controller/settings.ts';
import type { Prior } from '../learn/learnt.ts';
import type { Move, Profile } from '../mechanism/profile.ts';
import { straightMove } from '../trial/course.ts';
import { carryingGains, loopScales } from './scales.ts';

/** A first move: little travel, little output, much learnt. */
export interface FirstTrial {
  readonly gains: Gains;
  readonly move: Move;
  readonly outputCap: number;
  readonly duration: number;
}

/** How sure a prior must be of the top speed (σ in ln) to be steered by; wider = the machine is unknown. */
const KNOWN_SIGMA = 0.8;

/** True when the nameplate says enough to size a first move by. */
export function machineKnown(prior: Prior): boolean {
  return prior.sigma.topSpeed < KNOWN_SIGMA && prior.sigma.lag < KNOWN_SIGMA;
}

/**
 * The first trial of a run, or a repeat of it with more output: the direction check, made so that it also shows how
 * fast the mechanism gathers speed, how it slows and where friction stops it.
 *
 * @param attempt 0 for the first; each repeat because nothing moved raises the output and the gain by half
 * @param cap  smallest output (fraction) that moves it well, from safety
 */
export function firstTrial(profile: Profile, prior: Prior, cap: number, attempt: number): FirstTrial {
  const outputCap = Math.min(profile.limits.outputCap, cap * 1.5 ** attempt);
  const [from, to] = shortestMove(profile);
  const known = machineKnown(prior);
  const full = fullOutput(profile.controller);
  const base = known ? carryingGains(prior.response, profile) : carryingGains({ ...prior.response, hold: 0 }, profile);
  const room = outputCap - (known ? prior.response.hold : 0);
  if (profile.quantity === 'speed') {
    // P alone, no pace: it rests short of the setpoint by an amount that teaches the top speed, and cannot run away.
    const gains: Gains = { ...base, pace: 0, kp: (0.9 * outputCap * full * 1.5 ** attempt) / Math.abs(to - from) };
    return { gains, move: { from, to }, outputCap, duration: durationFor(profile, prior, known) };
  }
  const travel = firstTravel(profile, prior, room, known, Math.abs(to - from));
  const sign = Math.sign(to - from);
  const saturating = (room * full) / (0.6 * travel);
  const gentle = known ? 1.2 * loopScales(prior.response, profile).kpUnit : (room * full) / travel;
  const moving = (1.6 * prior.response.breakaway * full) / travel;
  const kp = Math.min(saturating, Math.max(gentle, known ? moving : 0)) * 1.5 ** attempt;
  return {
    gains: { ...base, kp },
    move: { from, to: from + sign * travel },
    outputCap,
    duration: durationFor(profile, prior, known),
  };
}

/** The target's shortest move; for a speed loop the one that starts slowest. */
function shortestMove(profile: Profile): readonly [from: number, to: number] {
  const moves = profile.target.moves.map(([from, to]) => {
    const straight = straightMove({ from, to }, profile.continuous);
    return [straight.from, straight.to] as const;
  });
  // A speed loop's direction shows from rest only: the slowest start comes first there.
  if (profile.quantity === 'speed') return [...moves].sort((a, b) => Math.abs(a[0]) - Math.abs(b[0]))[0] ?? [0, 0];
  const first = moves[0] ?? [0, 0];
  return moves.reduce((best, move) => (Math.abs(move[1] - move[0]) < Math.abs(best[1] - best[0]) ? move : best), first);
}

function firstTravel(profile: Profile, prior: Prior, room: number, known: boolean, whole: number): number {
  const finest = Math.max(8 * profile.target.tolerance, 25 * (profile.sensor?.resolution ?? 0));
  const wanted = known ? 4 * prior.response.topSpeed * Math.max(room, 0.1) * prior.response.lag : 0.4 * whole;
  return Math.min(whole, Math.max(wanted, finest, 0.15 * whole));
}

function durationFor(profile: Profile, prior: Prior, known: boolean): number {
  const slow = known ? 12 * (prior.response.lag + prior.response.delay) : 2 * profile.target.settlingTime;
  return Math.min(8, Math.max(1.2, 1.5 * profile.target.settlingTime, slow));
}
