/**
 * Counts of a sensor in one profile unit. A resolution that divides the unit evenly (0.0002 m, 0.25 deg) gives the whole number, so
 * that readings come out as the decimals that a logger would print.
 *
 * @param resolution profile unit, > 0
 */
export function countsPerUnit(resolution: number): number {
  const counts = 1 / resolution;
  const whole = Math.round(counts);
  return Math.abs(counts - whole) <= 1e-9 * counts ? whole : counts;
}

/**
 * A quantity as a sensor with whole counts reads it: the nearest count, and exactly between two the larger reading (so a half count
 * is never rounded towards or away from zero: equal steps everywhere).
 *
 * @param counts counts in one unit, from {@link countsPerUnit}
 */
export function quantise(value: number, counts: number): number {
  return Math.floor(value * counts + 0.5) / counts;
}
