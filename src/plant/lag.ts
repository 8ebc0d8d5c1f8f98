/**
 * Share of the way to its end value that a first-order lag has gone after `z` time constants: 1 − e^(−z).
 *
 * @param z time over time constant, 0 to Infinity
 */
export function lagShare(z: number): number {
  return -Math.expm1(-z);
}

/**
 * Mean of {@link lagShare} from 0 to `z`: 1 − (1 − e^(−z))/z. Times (end − start)·time it is the distance that a lagging
 * speed adds to that of its start value.
 *
 * Below z = 0.1 the closed form would cancel (a large lag with a large top speed is a constant acceleration, and its
 * distance must not drown in rounding), so the power series is summed there; 10 terms reach 1e-17 relative.
 *
 * @param z time over time constant, 0 to Infinity
 */
export function meanLagShare(z: number): number {
  if (z > 0.1) return 1 + Math.expm1(-z) / z;
  return (
    z *
    (1 / 2 -
      z *
        (1 / 6 -
          z *
            (1 / 24 -
              z *
                (1 / 120 -
                  z *
                    (1 / 720 -
                      z * (1 / 5040 - z * (1 / 40320 - z * (1 / 362880 - z * (1 / 3628800 - z * (1 / 39916800))))))))))
  );
}

/**
 * Time until a lagging speed that starts at `from` and ends at `end` reaches `level`, which lies between them.
 *
 * @param lag time constant, s
 * @returns s; Infinity when `level` is the end value itself
 */
export function timeToLevel(from: number, level: number, end: number, lag: number): number {
  if (from === level) return 0;
  return lag * Math.log1p((from - level) / (level - end));
}
