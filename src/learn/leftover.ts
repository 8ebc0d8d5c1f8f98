import type { Drive } from './evidence.ts';

/** What a model leaves of some trials unexplained. */
export interface Leftover {
  /** One sigma, robust, unit of what was measured. */
  readonly spread: number;
  /** Share of the rows that count as independent, 0 to 1. */
  readonly independence: number;
}

/** Correlation from row to row beyond which it is taken as this: there is always some news in a record. */
const MOST_CORRELATION = 0.95;

/**
 * Size and independence of what is left between readings and answers. A record whose rows err alike tells less than its length:
 * for residuals of correlation ρ from row to row, (1 − ρ)/(1 + ρ) of it. Bayley & Hammersley, "The effective number of
 * independent observations in an autocorrelated time series", J. R. Stat. Soc. Suppl. 8 (1946) 184 (mem).
 */
export function leftoverOf(drives: readonly Drive[], answers: readonly Float64Array[]): Leftover {
  let product = 0;
  let squares = 0;
  let worth = 0;
  let squaresBetween = 0;
  const sizes: { readonly size: number; readonly worth: number }[] = [];
  drives.forEach(({ measured, information }, index) => {
    const answer = answers[index];
    if (!answer) return;
    let before = 0;
    let worthBefore = 0;
    for (let row = 0; row < measured.length; row++) {
      const own = information[row] ?? 0;
      const left = (measured[row] ?? 0) - (answer[row] ?? 0);
      const shared = Math.sqrt(own * worthBefore);
      product += shared * before * left;
      squaresBetween += shared * 0.5 * (before * before + left * left);
      squares += own * left * left;
      worth += own;
      if (own > 0) sizes.push({ size: Math.abs(left), worth: own });
      before = left;
      worthBefore = own;
    }
  });
  const correlation = squaresBetween > 0 ? Math.max(0, Math.min(MOST_CORRELATION, product / squaresBetween)) : 0;
  // A few rows that are far off may be glitches; a median alone would not see a response that errs only while it moves.
  const spread = Math.max(1.4826 * middleOf(sizes, worth), 0.5 * Math.sqrt(squares / Math.max(worth, 1e-12)));
  return { spread, independence: (1 - correlation) / (1 + correlation) };
}

/** The size below which half of the worth lies. */
function middleOf(sizes: { readonly size: number; readonly worth: number }[], whole: number): number {
  sizes.sort((a, b) => a.size - b.size);
  let below = 0;
  for (const { size, worth } of sizes) {
    below += worth;
    if (below >= 0.5 * whole) return size;
  }
  return 0;
}
