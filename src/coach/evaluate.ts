import type { Gains } from '../controller/settings.ts';
import { maxSensitivityOf } from '../margin/of-response.ts';
import type { Move, Profile } from '../mechanism/profile.ts';
import type { QuickFigures } from '../trial/quick-figures.ts';
import type { Aim } from './aim.ts';
import type { Draw } from './draws.ts';
import type { Rehearsal } from './rehearsal.ts';

/** What a set of gains does over some draws and moves. */
export interface Score {
  /** s: mean settling time with penalties for all that must not be. */
  readonly cost: number;
  /** Share of draws and moves that meet the aim. */
  readonly meets: number;
}

/** Everything that stays fixed during one search. */
export interface Ground {
  readonly profile: Profile;
  readonly aim: Aim;
  readonly moves: readonly Move[];
  readonly outputCap: number;
  readonly rehearsal: Rehearsal;
}

/** Largest sensitivity of the linear loop that is let pass; design's coach, Objective. */
const MOST_SENSITIVE = 2;

/**
 * Cost of one rehearsed trial, s: its settling time, or the whole record and more when it does not settle; overshoot,
 * resting outside the tolerance, chatter and growing swing are charged in proportion to how far they are off, so that a
 * search has a slope to follow.
 */
function trialCost(quick: QuickFigures, aim: Aim): number {
  let cost = quick.settlingTime ?? aim.duration * 1.2;
  if (quick.settlingTime === null) cost += 0.3 * aim.duration * Math.min(4, Math.abs(quick.endError) / aim.tolerance);
  const excess = quick.overshoot - aim.overshoot;
  if (excess > 0) cost += aim.settlingTime * (0.15 + Math.min(6, excess / Math.max(aim.overshoot, 2)));
  if (quick.chatter > MOST_CHATTER) cost += 0.5 * aim.settlingTime * Math.min(4, quick.chatter / MOST_CHATTER - 1);
  if (quick.growing) cost += 6 * aim.duration;
  return cost;
}

/** Reversals a second above which a response counts as chattering. */
const MOST_CHATTER = 8;

/** Does a rehearsed trial meet the aim? */
function meetsAim(quick: QuickFigures, aim: Aim): boolean {
  return (
    quick.settlingTime !== null &&
    quick.settlingTime <= aim.settlingTime &&
    quick.overshoot <= aim.overshoot + 1e-9 &&
    !quick.growing
  );
}

/**
 * Rehearses gains on every draw and move.
 *
 * @param draws at least one
 */
export function scoreOf(gains: Gains, draws: readonly Draw[], ground: Ground): Score {
  let sum = 0;
  let met = 0;
  for (const draw of draws) {
    for (const move of ground.moves) {
      const quick = ground.rehearsal.run(draw.plant, gains, move, ground.outputCap);
      sum += trialCost(quick, ground.aim);
      if (meetsAim(quick, ground.aim)) met++;
    }
  }
  const cases = draws.length * ground.moves.length;
  const failing = 1 - met / cases;
  const cost = sum / cases + 1.5 * ground.aim.settlingTime * Math.max(0, failing - 0.1);
  return { cost: cost + sensitivityCharge(gains, draws, ground), meets: met / cases };
}

function sensitivityCharge(gains: Gains, draws: readonly Draw[], ground: Ground): number {
  const first = draws[0];
  if (!first || gains.kp <= 0) return 0;
  const { profile } = ground;
  const peak = maxSensitivityOf({
    response: first.response,
    quantity: profile.quantity,
    gains,
    settings: profile.controller,
    sensorDelay: profile.sensor?.delay ?? 0,
  });
  if (!Number.isFinite(peak)) return 4 * ground.aim.settlingTime;
  return peak > MOST_SENSITIVE ? ground.aim.settlingTime * Math.min(4, 0.2 + 2 * (peak - MOST_SENSITIVE)) : 0;
}
