import { uniformFloat64 } from 'pure-rand/distribution/uniformFloat64';
import { xoroshiro128plus } from 'pure-rand/generator/xoroshiro128plus';

/** Draws thrown away before the first that counts. */
const WARM_UP = 16;

/**
 * Numbers drawn from the standard normal distribution, the same for the same seed. Box & Muller, "A note on the generation of random
 * normal deviates", Ann. Math. Stat. 29 (1958) 610 (mem).
 *
 * @param seed any integer; streams of one trial use different ones
 */
export function normalNumbers(seed: number, count: number): Float64Array {
  const generator = xoroshiro128plus(seed);
  // A small seed leaves the state nearly empty: the first numbers would stand far out.
  for (let warm = 0; warm < WARM_UP; warm++) uniformFloat64(generator);
  const numbers = new Float64Array(count);
  for (let at = 0; at < count; at += 2) {
    const radius = Math.sqrt(-2 * Math.log1p(-uniformFloat64(generator)));
    const angle = 2 * Math.PI * uniformFloat64(generator);
    numbers[at] = radius * Math.cos(angle);
    if (at + 1 < count) numbers[at + 1] = radius * Math.sin(angle);
  }
  return numbers;
}
