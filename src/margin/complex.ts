/** A complex number. */
export interface Complex {
  readonly re: number;
  readonly im: number;
}

export const divide = (a: Complex, b: Complex): Complex => {
  const size = b.re * b.re + b.im * b.im;
  return { re: (a.re * b.re + a.im * b.im) / size, im: (a.im * b.re - a.re * b.im) / size };
};
export const magnitude = (a: Complex): number => Math.hypot(a.re, a.im);

/** Value of a polynomial, highest power first, at a point (Horner). */
export function evaluate(polynomial: readonly number[], at: Complex): Complex {
  let re = 0;
  let im = 0;
  for (const coefficient of polynomial) {
    const next = re * at.re - im * at.im + coefficient;
    im = re * at.im + im * at.re;
    re = next;
  }
  return { re, im };
}

/** Product of two polynomials, highest power first. */
export function product(a: readonly number[], b: readonly number[]): readonly number[] {
  const result = new Array<number>(a.length + b.length - 1).fill(0);
  a.forEach((x, i) => {
    b.forEach((y, j) => {
      result[i + j] = (result[i + j] ?? 0) + x * y;
    });
  });
  return result;
}

/** Sum of two polynomials, highest power first. */
export function sum(a: readonly number[], b: readonly number[]): readonly number[] {
  const length = Math.max(a.length, b.length);
  const at = (p: readonly number[], k: number) => p[k - (length - p.length)] ?? 0;
  return Array.from({ length }, (_, k) => at(a, k) + at(b, k));
}
