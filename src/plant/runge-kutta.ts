/**
 * One step of the classical fourth-order Runge–Kutta method. Kutta, Z. Math. Phys. 46 (1901) 435 (mem).
 *
 * @param slope writes the rates at `y` into its second argument
 * @param step s, ≥ 0
 * @returns the state after the step, anew
 */
export function rungeKutta(
  slope: (y: Float64Array, into: Float64Array) => void,
  from: Float64Array,
  step: number,
): Float64Array {
  const size = from.length;
  const rate = new Float64Array(size);
  const sum = new Float64Array(size);
  const at = Float64Array.from(from);
  for (const [weight, reach] of STAGES) {
    slope(at, rate);
    for (let k = 0; k < size; k++) {
      sum[k] = (sum[k] ?? 0) + weight * (rate[k] ?? 0);
      at[k] = (from[k] ?? 0) + reach * step * (rate[k] ?? 0);
    }
  }
  return from.map((value, k) => value + (step / 6) * (sum[k] ?? 0));
}

/** Weight of each stage's rate, and how far along it the next stage looks. */
const STAGES = [
  [1, 0.5],
  [2, 0.5],
  [2, 1],
  [1, 0],
] as const;
