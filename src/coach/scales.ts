import { type ControllerSettings, fullOutput, type Gains, NO_GAINS } from '../controller/settings.ts';
import type { Profile } from '../mechanism/profile.ts';
import type { ResponseModel } from '../plant/response-model.ts';

/** The natural sizes of a loop, from which candidate gains are laid out. Gains here are in output unit per unit. */
export interface LoopScales {
  /** Proportional gain at which the loop under P alone is critically damped (position), or 1/K (speed). */
  readonly kpUnit: number;
  /** Proportional gain at which dead time alone sets the limit. */
  readonly kpLimit: number;
  /** All that delays the loop, s: dead time, sensor, half a tick of hold, half a tick of backward difference. */
  readonly dead: number;
  /** The lag that the derivative can cancel, s. */
  readonly lag: number;
  /** Output that starts the mechanism, output unit. */
  readonly breakaway: number;
}

/** All that delays a loop beyond the mechanism's own lag, s. */
function deadTime(response: ResponseModel, profile: Profile): number {
  return response.delay + (profile.sensor?.delay ?? 0) + profile.controller.period;
}

/**
 * Natural sizes of the loop around one response model.
 *
 * Source: critical damping of K/(s(τs+1)) under P at 4·kp·K·τ = 1 (closed form); crossover limit 1/(2θ) for an
 * integrating process with dead time θ (Skogestad, J. Process Control 13 (2003) 291, τc = θ).
 */
export function loopScales(response: ResponseModel, profile: Profile): LoopScales {
  const full = fullOutput(profile.controller);
  const dead = deadTime(response, profile);
  const lag = Math.max(response.lag, 1e-4);
  const position = profile.quantity === 'position';
  return {
    kpUnit: position ? full / (4 * response.topSpeed * (lag + dead)) : full / response.topSpeed,
    kpLimit: position ? full / (2 * response.topSpeed * dead) : (full * lag) / (2 * response.topSpeed * dead),
    dead,
    lag,
    breakaway: full * Math.max(response.breakaway, response.breakawayBack),
  };
}

/** The terms that carry the load before any error arises: the weight of a lift or arm, the steady speed of a speed loop. */
export function carryingTerms(response: ResponseModel, profile: Profile): Pick<Gains, 'hold' | 'pace'> {
  const full = fullOutput(profile.controller);
  const carries = profile.kind === 'lift' || profile.kind === 'arm';
  return {
    hold: carries ? full * response.hold : 0,
    pace: profile.quantity === 'speed' ? full * steadyOutputPerUnit(response, profile) : 0,
  };
}

/** Output (fraction) per unit of speed that keeps the target's speeds up, its share of drag included. */
function steadyOutputPerUnit(response: ResponseModel, profile: Profile): number {
  const speeds = profile.target.moves.flatMap(([from, to]) => [Math.abs(from), Math.abs(to)]).filter((v) => v > 0);
  if (speeds.length === 0) return 1 / response.topSpeed;
  const share = speeds.reduce((sum, speed) => sum + response.drag / speed, 0) / speeds.length;
  return 1 / response.topSpeed + share;
}

/** Largest kd whose answer to one count of the sensor stays under 6 % of full output; infinite for a smooth sensor. */
export function kdLimit(profile: Profile): number {
  const controller: ControllerSettings = profile.controller;
  const noise = Math.max(profile.sensor?.resolution ?? 0, 2 * (profile.sensor?.noise ?? 0));
  if (noise === 0) return Number.POSITIVE_INFINITY;
  return (0.06 * fullOutput(controller) * (controller.period + controller.derivativeFilter)) / noise;
}

/** Gains with the carrying terms of a response and nothing else. */
export function carryingGains(response: ResponseModel, profile: Profile): Gains {
  return { ...NO_GAINS, ...carryingTerms(response, profile) };
}
