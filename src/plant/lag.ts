/**
 * Share of the way to its end value that a first-order lag has gone after `z` time constants: 1 − e^(−z).
 *
 * @param z time over time constant, 0 to Infinity
 */
export function lagShare(z: number): number {
  return -Math.expm1(-z);
}

// Power series of 1 − (1 − e^(−z))/z, over z: 1/2! − z/3! + z²/4! − …; ten terms reach 1e-17 relative at z = 0.1.
const SERIES = [
  1 / 2,
  -1 / 6,
  1 / 24,
  -1 / 120,
  1 / 720,
  -1 / 5040,
  1 / 40320,
  -1 / 362880,
  1 / 3628800,
  -1 / 39916800,
];
const SERIES_UP_TO = 0.1;

/**
 * Mean of {@link lagShare} from 0 to `z`: 1 − (1 − e^(−z))/z. Times (end − start)·time it is the distance that a lagging
 * speed adds to that of its start value.
 *
 * For small z the closed form would cancel (a long lag with a high top speed is a constant acceleration, and its distance must
 * not drown in rounding), so the power series is summed there.
 *
 * @param z time over time constant, > 0, to Infinity
 * @param share lagShare(z), where it is at hand
 */
export function meanLagShare(z: number, share: number = lagShare(z)): number {
  if (z > SERIES_UP_TO) return 1 - share / z;
  let sum = 0;
  for (let k = SERIES.length - 1; k >= 0; k--) sum = sum * z + (SERIES[k] ?? 0);
  return sum * z;
}

/**
 * Time until a lagging speed that starts at `from` and ends at `end` reaches `level`, which lies between them.
 *
 * @param lag time constant, s
 * @returns s; Infinity when `level` is the end value itself
 */
export function timeToLevel(from: number, level: number, end: number, lag: number): number {
  const ratio = (from - level) / (level - end);
  // log is three times as fast as log1p, and as good where 1 + ratio loses nothing that matters.
  return lag * (ratio > 0.5 ? Math.log(1 + ratio) : Math.log1p(ratio));
}
