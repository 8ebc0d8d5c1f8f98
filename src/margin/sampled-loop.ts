import { EigenvalueDecomposition, Matrix } from 'ml-matrix';
import { type ControllerSettings, fullOutput, type Gains } from '../controller/settings.ts';
import type { ResponseModel } from '../plant/response-model.ts';
import { product, sum } from './complex.ts';

/** A sampled open loop as a ratio of polynomials in z, highest power first, and its tick. */
export interface SampledLoop {
  readonly numerator: readonly number[];
  readonly denominator: readonly number[];
  /** s. */
  readonly period: number;
}

/**
 * The linear part of a response model (drag off) behind a zero-order hold, sampled with the controller; dead time of any
 * length, exactly: a held output that arrives within a tick splits that tick in two.
 *
 * @param deadTime s, all of it from output to reading
 * Source: closed form; e.g. Åström & Wittenmark, Computer-Controlled Systems, sampling a system with time delay (mem).
 */
export function sampledPlant(
  response: Pick<ResponseModel, 'topSpeed' | 'lag'>,
  quantity: 'position' | 'speed',
  period: number,
  deadTime: number,
): SampledLoop {
  const { topSpeed: k, lag } = response;
  const whole = Math.floor(deadTime / period + 1e-9);
  const part = Math.max(0, deadTime - whole * period);
  const decay = Math.exp(-period / lag);
  const rest = period - part;
  // Speed and travel that a unit of output builds up from rest in a time.
  const speed = (t: number) => -k * Math.expm1(-t / lag);
  const travel = (t: number) => k * (t + lag * Math.expm1(-t / lag));
  const restDecay = Math.exp(-rest / lag);
  const early = { v: restDecay * speed(part), x: travel(part) + lag * (1 - restDecay) * speed(part) };
  const late = { v: speed(rest), x: travel(rest) };
  const shift = [1, ...new Array<number>(whole + 1).fill(0)];
  if (quantity === 'speed') {
    return { numerator: [late.v, early.v], denominator: product([1, -decay], shift), period };
  }
  const carried = lag * (1 - decay);
  const numerator = sum(product([1, -decay], [late.x, early.x]), [carried * late.v, carried * early.v]);
  return { numerator, denominator: product(product([1, -1], [1, -decay]), shift), period };
}

/** The controller's linear part at its tick: P, I with the present error in its sum, backward difference with its filter. */
export function sampledController(gains: Gains, settings: ControllerSettings): SampledLoop {
  const { period, derivativeFilter } = settings;
  const full = fullOutput(settings);
  const share = period / (derivativeFilter + period);
  const terms: { numerator: readonly number[]; denominator: readonly number[] }[] = [];
  terms.push({ numerator: [gains.kp / full], denominator: [1] });
  if (gains.ki !== 0) terms.push({ numerator: [(gains.ki * period) / full, 0], denominator: [1, -1] });
  if (gains.kd !== 0) {
    const size = (gains.kd * share) / (period * full);
    terms.push({ numerator: [size, -size], denominator: [1, share - 1] });
  }
  return terms.reduce<SampledLoop>(
    (total, term) => ({
      numerator: sum(product(total.numerator, term.denominator), product(term.numerator, total.denominator)),
      denominator: product(total.denominator, term.denominator),
      period,
    }),
    { numerator: [0], denominator: [1], period },
  );
}

/** Two blocks one after the other. */
export function inSeries(a: SampledLoop, b: SampledLoop): SampledLoop {
  return {
    numerator: product(a.numerator, b.numerator),
    denominator: product(a.denominator, b.denominator),
    period: a.period,
  };
}

/** Characteristic polynomial of the loop closed with unit negative feedback. */
export function characteristic(loop: SampledLoop): readonly number[] {
  return sum(loop.denominator, loop.numerator);
}

/**
 * Are all roots of a polynomial inside the unit circle? By the Schur–Cohn recursion: no root is computed.
 *
 * Source: Jury, Theory and Application of the z-Transform Method (1964) (mem).
 */
export function isSchurStable(polynomial: readonly number[]): boolean {
  let now = Float64Array.from(polynomial);
  while (now.length > 1) {
    const lead = now[0] ?? 0;
    const last = now.at(-1) ?? 0;
    const ratio = last / lead;
    if (!(Math.abs(ratio) < 1)) return false;
    const next = new Float64Array(now.length - 1);
    for (let k = 0; k < next.length; k++) next[k] = (now[k] ?? 0) - ratio * (now[now.length - 1 - k] ?? 0);
    now = next;
  }
  return true;
}

/** Largest magnitude of a polynomial's roots, from the eigenvalues of its companion matrix. */
export function spectralRadiusOf(polynomial: readonly number[]): number {
  const lead = polynomial[0] ?? 1;
  const degree = polynomial.length - 1;
  if (degree < 1) return 0;
  const companion = Matrix.zeros(degree, degree);
  for (let k = 0; k < degree; k++) companion.set(0, k, -(polynomial[k + 1] ?? 0) / lead);
  for (let k = 1; k < degree; k++) companion.set(k, k - 1, 1);
  const { realEigenvalues, imaginaryEigenvalues } = new EigenvalueDecomposition(companion);
  return Math.max(...realEigenvalues.map((re, k) => Math.hypot(re, imaginaryEigenvalues[k] ?? 0)));
}
