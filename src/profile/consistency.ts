import type { Profile } from '../mechanism/profile.ts';
import { unitScale } from '../mechanism/units.ts';

/** A rule between fields that is broken. */
export interface Inconsistency {
  readonly field: string;
  readonly what: string;
  readonly expected: string;
}

/** The first rule between fields that a profile breaks; null when it breaks none. */
export function inconsistencyOf(profile: Profile): Inconsistency | null {
  return unitRule(profile) ?? limitRule(profile) ?? outputRule(profile) ?? moveRule(profile) ?? frictionRule(profile);
}

function unitRule({ kind, quantity, unit, continuous }: Profile): Inconsistency | null {
  const { perSecond, dimension } = unitScale(unit);
  if (perSecond !== (quantity === 'speed')) {
    const example = quantity === 'speed' ? 'rpm, rad/s or m/s' : 'm, deg or rev';
    return {
      field: 'unit',
      what: `${unit} does not measure a ${quantity}`,
      expected: `a unit of ${quantity}, such as ${example}`,
    };
  }
  const line = kind === 'travel' || kind === 'lift';
  if (!line && dimension === 'length') {
    return {
      field: 'unit',
      what: `${unit} is a length, and a ${kind} is measured by angle`,
      expected: 'rad, deg or rev (per second for a speed), or rpm',
    };
  }
  if (continuous !== null && kind !== 'turn') {
    return { field: 'continuous', what: `a ${kind} does not wrap`, expected: 'null for every kind but turn' };
  }
  if (kind === 'spin' && quantity === 'position') {
    return { field: 'quantity', what: 'a spin has no position to hold', expected: '"speed", or the kind turn' };
  }
  return null;
}

function limitRule({ limits: { min, max } }: Profile): Inconsistency | null {
  if (min !== null && max !== null && min >= max) {
    return {
      field: 'limits.min',
      what: `the lower limit ${min} is not below the upper limit ${max}`,
      expected: 'min below max, or null for a side without a limit',
    };
  }
  return null;
}

function outputRule({ controller: { output } }: Profile): Inconsistency | null {
  if (!(output.min <= 0 && output.max > 0)) {
    return {
      field: 'controller.output',
      what: `outputs from ${output.min} to ${output.max}`,
      expected: 'min at or below 0 and max above 0, such as -1 and 1',
    };
  }
  const most = { fraction: 1, percent: 100, volts: 1000 }[output.unit];
  if (Math.max(output.max, -output.min) > most) {
    return {
      field: 'controller.output.max',
      what: `${Math.max(output.max, -output.min)} is no ${output.unit}`,
      expected: `no more than ${most}`,
    };
  }
  return null;
}

function moveRule({ target, limits, quantity, continuous }: Profile): Inconsistency | null {
  for (const [k, [from, to]] of target.moves.entries()) {
    const field = `target.moves[${k}]`;
    if (from === to) return { field, what: 'a move that goes nowhere', expected: 'two different ends' };
    if (Math.abs(to - from) <= target.tolerance) {
      return {
        field,
        what: `a move of ${Math.abs(to - from)} is within the tolerance of ${target.tolerance}`,
        expected: 'a move several times longer than the tolerance',
      };
    }
    if (quantity === 'speed' || continuous !== null) continue;
    for (const end of [from, to]) {
      if ((limits.min !== null && end < limits.min) || (limits.max !== null && end > limits.max)) {
        return {
          field,
          what: `${end} is outside the travel limits ${limits.min ?? 'open'} to ${limits.max ?? 'open'}`,
          expected: 'both ends inside the limits',
        };
      }
    }
  }
  return null;
}

function frictionRule({ friction }: Profile): Inconsistency | null {
  if (friction?.drag != null && friction.breakaway !== null && friction.breakaway < friction.drag) {
    return {
      field: 'friction.breakaway',
      what: `breakaway ${friction.breakaway} is below drag ${friction.drag}`,
      expected: 'at least as much as drag: it takes no less to start than to keep moving',
    };
  }
  return null;
}
