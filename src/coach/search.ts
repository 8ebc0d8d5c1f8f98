import type { Gains } from '../controller/settings.ts';

/** Upper bounds that trust and safety put on a search; gains in output unit, zone in the profile's unit. */
export interface GainBounds {
  readonly kp: readonly [low: number, high: number];
  readonly ki: readonly [low: number, high: number];
  readonly kd: readonly [low: number, high: number];
  readonly zone: readonly [low: number, high: number];
}

/** Which gains a stage may move; the others stay as they are in the start set. */
export type Freed = readonly ('kp' | 'ki' | 'kd' | 'zone')[];

export interface Found {
  readonly gains: Gains;
  readonly cost: number;
}

/** Mean cost of a set of gains, lower is better; null bound = no early end. */
export type CostOf = (gains: Gains) => number;

/** Keeps gains inside bounds; a ki or kd of zero stays zero (that term is off). */
export function clampGains(gains: Gains, bounds: GainBounds): Gains {
  const within = (value: number, [low, high]: readonly [number, number]) => Math.min(high, Math.max(low, value));
  return {
    ...gains,
    kp: within(gains.kp, bounds.kp),
    ki: gains.ki === 0 ? 0 : within(gains.ki, bounds.ki),
    kd: gains.kd === 0 ? 0 : within(gains.kd, bounds.kd),
    zone: gains.zone === null ? null : within(gains.zone, bounds.zone),
  };
}

/**
 * The best few of many candidates by cost, best first, none twice.
 *
 * @param keep how many to return at most
 */
export function bestOf(candidates: readonly Gains[], costOf: CostOf, keep: number): readonly Found[] {
  const seen = new Set<string>();
  const found: Found[] = [];
  for (const gains of candidates) {
    const key = `${gains.kp}|${gains.ki}|${gains.kd}|${gains.zone}|${gains.hold}|${gains.pace}`;
    if (seen.has(key)) continue;
    seen.add(key);
    found.push({ gains, cost: costOf(gains) });
  }
  found.sort((a, b) => a.cost - b.cost);
  return found.slice(0, keep);
}

/** One trial direction of the refinement: what each freed gain is multiplied by for a step of 1 in ln. */
type Direction = Readonly<Partial<Record<'kp' | 'ki' | 'kd' | 'zone', number>>>;

// Along kp alone, kd alone, both together (same damping ratio in kd/kp), against each other, and the integral's two.
const DIRECTIONS: readonly Direction[] = [
  { kp: 1 },
  { kd: 1 },
  { kp: 1, kd: 1 },
  { kp: 1, kd: 0.5 },
  { ki: 1 },
  { zone: 1 },
  { ki: 1, kp: 1 },
  { zone: -1, ki: 1 },
];

function step(gains: Gains, direction: Direction, size: number): Gains {
  const scale = (name: keyof Direction) => Math.exp((direction[name] ?? 0) * size);
  return {
    ...gains,
    kp: gains.kp * scale('kp'),
    ki: gains.ki * scale('ki'),
    kd: gains.kd * scale('kd'),
    zone: gains.zone === null ? null : gains.zone * scale('zone'),
  };
}

/**
 * Refines a set of gains by a pattern search in their logarithms: tries each direction both ways, keeps what is better,
 * halves the step when nothing is.
 *
 * Source: Hooke & Jeeves, "Direct search solution of numerical and statistical problems", J. ACM 8 (1961) 212 (mem);
 * the cost has steps (settling time jumps), which rules gradients out.
 */
export function refine(
  start: Found,
  costOf: CostOf,
  options: {
    readonly freed: Freed;
    readonly bounds: GainBounds;
    readonly firstStep: number;
    readonly lastStep: number;
  },
): Found {
  const directions = DIRECTIONS.filter((direction) =>
    Object.keys(direction).every((name) => (options.freed as readonly string[]).includes(name)),
  );
  let best = start;
  for (let size = options.firstStep; size >= options.lastStep; ) {
    let improved = false;
    for (const direction of directions) {
      for (const sign of [1, -1]) {
        const next = clampGains(step(best.gains, direction, sign * size), options.bounds);
        if (sameGains(next, best.gains)) continue;
        const cost = costOf(next);
        if (cost < best.cost) {
          best = { gains: next, cost };
          improved = true;
          break;
        }
      }
    }
    if (!improved) size /= 2;
  }
  return best;
}

/** Are two sets of gains the same to rounding? */
export function sameGains(a: Gains, b: Gains): boolean {
  const near = (x: number, y: number) => Math.abs(x - y) <= 1e-9 * Math.max(Math.abs(x), Math.abs(y));
  return (
    near(a.kp, b.kp) &&
    near(a.ki, b.ki) &&
    near(a.kd, b.kd) &&
    near(a.hold, b.hold) &&
    near(a.pace, b.pace) &&
    (a.zone === null ? b.zone === null : b.zone !== null && near(a.zone, b.zone))
  );
}
