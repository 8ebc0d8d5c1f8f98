/** A distribution's centre and the lower triangle whose square is its covariance, entry (i, j) at i·size + j. */
export interface Spread {
  readonly centre: Float64Array;
  readonly lower: Float64Array;
}

/** Share of the first covariance that is always kept: a second round must not fall in on a few lucky points. */
const KEPT = 0.1;

/** Mean and covariance of weighted points, mixed with a covariance to fall back on. */
export function momentsOf(points: readonly Float64Array[], shares: Float64Array, fallBack: Float64Array): Spread {
  const size = points[0]?.length ?? 0;
  const centre = new Float64Array(size);
  points.forEach((point, at) => {
    for (let j = 0; j < size; j++) centre[j] = (centre[j] ?? 0) + (shares[at] ?? 0) * (point[j] ?? 0);
  });
  const covariance = fallBack.map((value) => KEPT * value);
  points.forEach((point, at) => {
    const share = (1 - KEPT) * (shares[at] ?? 0);
    for (let i = 0; i < size; i++) {
      const off = share * ((point[i] ?? 0) - (centre[i] ?? 0));
      for (let j = 0; j <= i; j++) {
        const product = off * ((point[j] ?? 0) - (centre[j] ?? 0));
        covariance[i * size + j] = (covariance[i * size + j] ?? 0) + product;
      }
    }
  });
  return { centre, lower: choleskyOf(covariance, size) };
}

/** Lower triangle of a covariance; a direction that rounding left without extent gets a tiny one. */
export function choleskyOf(covariance: Float64Array, size: number): Float64Array {
  const lower = new Float64Array(size * size);
  for (let i = 0; i < size; i++) {
    for (let j = 0; j <= i; j++) {
      let sum = covariance[i * size + j] ?? 0;
      for (let k = 0; k < j; k++) sum -= (lower[i * size + k] ?? 0) * (lower[j * size + k] ?? 0);
      if (i === j) lower[i * size + i] = Math.sqrt(Math.max(sum, 1e-12 * (covariance[i * size + i] ?? 0), 1e-18));
      else lower[i * size + j] = sum / (lower[j * size + j] ?? 1);
    }
  }
  return lower;
}
