/**
 * The first four φ functions of an exponential decay: φ1 = (1 − e^(−z))/z and φ(k+1) = (1/k! − φk)/z. A first-order lag that is
 * driven by t^k/k! answers with t^(k+1)·φ(k+1), and its integral with t^(k+2)·φ(k+2).
 *
 * Hochbruck & Ostermann, "Exponential integrators", Acta Numerica 19 (2010) 209 (mem; they write φk for growth).
 */
export interface Phi {
  one: number;
  two: number;
  three: number;
  four: number;
}

/** An unfilled set. */
export function newPhi(): Phi {
  return { one: 0, two: 0, three: 0, four: 0 };
}

/** Works out φ1 … φ4 at `z` ≥ 0. Below 1 the recurrence upwards would cancel, so φ4 is summed there and the rest follow down. */
export function setPhi(phi: Phi, z: number): void {
  if (z < 1) {
    let term = 1 / 24;
    let sum = term;
    for (let k = 5; Math.abs(term) > 1e-18; k++) {
      term *= -z / k;
      sum += term;
    }
    phi.four = sum;
    phi.three = 1 / 6 - z * phi.four;
    phi.two = 1 / 2 - z * phi.three;
    phi.one = 1 - z * phi.two;
  } else {
    phi.one = -Math.expm1(-z) / z;
    phi.two = (1 - phi.one) / z;
    phi.three = (1 / 2 - phi.two) / z;
    phi.four = (1 / 6 - phi.three) / z;
  }
}
