/**
 * Where a continuous function that changes sign between `low` and `high` is zero, to rounding: false position by the Illinois
 * rule, with a halving whenever three steps running did not halve the bracket.
 *
 * Dowell & Jarratt, "A modified regula falsi method for computing the root of an equation", BIT 11 (1971) 168 (mem).
 */
export function findRoot(f: (t: number) => number, low: number, high: number): number {
  let fLow = f(low);
  let fHigh = f(high);
  let width = high - low;
  let moved = 0;
  for (let round = 1; fLow !== 0 && fHigh !== 0; round++) {
    let next = (low * fHigh - high * fLow) / (fHigh - fLow);
    if (round % 3 === 0) {
      if (high - low > 0.5 * width) next = Number.NaN;
      width = high - low;
    }
    if (!(next > low && next < high)) next = low + 0.5 * (high - low);
    if (!(next > low && next < high)) break;
    const fNext = f(next);
    if (fNext > 0 === fHigh > 0) {
      high = next;
      fHigh = fNext;
      if (moved === 1) fLow *= 0.5;
      moved = 1;
    } else {
      low = next;
      fLow = fNext;
      if (moved === -1) fHigh *= 0.5;
      moved = -1;
    }
  }
  return fLow === 0 ? low : high;
}
