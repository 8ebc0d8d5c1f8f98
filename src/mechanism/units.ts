import type { Unit } from './profile.ts';

// Exact by definition: the international inch is 25.4 mm (1959 agreement; ISO 80000-3).
const METRES: Partial<Record<Unit, number>> = { m: 1, cm: 0.01, mm: 0.001, in: 0.0254, ft: 0.3048 };
const RADIANS: Partial<Record<Unit, number>> = { rad: 1, deg: Math.PI / 180, rev: 2 * Math.PI };

/** What a unit measures once the "per second" is taken off. */
export type Dimension = 'length' | 'angle';

export interface UnitScale {
  readonly dimension: Dimension;
  /** SI units (m, rad, m/s or rad/s) in one of it. */
  readonly toSi: number;
  readonly perSecond: boolean;
}

/** Size of a unit in SI, and what it measures. */
export function unitScale(unit: Unit): UnitScale {
  if (unit === 'rpm') return { dimension: 'angle', toSi: (2 * Math.PI) / 60, perSecond: true };
  const perSecond = unit.endsWith('/s');
  const base = (perSecond ? unit.slice(0, -2) : unit) as Unit;
  const metres = METRES[base];
  if (metres !== undefined) return { dimension: 'length', toSi: metres, perSecond };
  return { dimension: 'angle', toSi: RADIANS[base] ?? 1, perSecond };
}
