/** Columns of equal length, one after the other in memory: what least squares is done on. */
export interface Columns {
  readonly rows: number;
  readonly count: number;
  /** Entry (row, column) is at column·rows + row. */
  readonly values: Float64Array;
}

/** An upper triangle, entry (i, j) at i·count + j, and what the same turns made of a right-hand side (its first `count` rows). */
export interface Triangle {
  readonly count: number;
  readonly values: Float64Array;
  readonly turned: Float64Array;
}

export function newColumns(rows: number, count: number): Columns {
  return { rows, count, values: new Float64Array(rows * count) };
}

/**
 * Orthogonal triangulation of columns and a right-hand side, both written over.
 *
 * @returns R, and the first rows of Qᵀ·right
 * Source: Householder, "Unitary triangularization of a nonsymmetric matrix", J. ACM 5 (1958) 339 (mem).
 */
export function triangulate({ rows, count, values }: Columns, right: Float64Array): Triangle {
  const triangle = new Float64Array(count * count);
  for (let j = 0; j < count; j++) {
    const own = j * rows;
    let squares = 0;
    for (let row = j; row < rows; row++) squares += (values[own + row] ?? 0) ** 2;
    const head = values[own + j] ?? 0;
    // Away from the head's own sign, so that nothing cancels.
    const diagonal = head > 0 ? -Math.sqrt(squares) : Math.sqrt(squares);
    for (let k = 0; k < j; k++) triangle[k * count + j] = values[own + k] ?? 0;
    triangle[j * count + j] = diagonal;
    if (diagonal === 0) continue;
    values[own + j] = head - diagonal;
    const half = diagonal * (head - diagonal);
    for (let k = j + 1; k < count; k++) mirror(values, own, values, k * rows, j, rows, half);
    mirror(values, own, right, 0, j, rows, half);
  }
  return { count, values: triangle, turned: right.slice(0, count) };
}

/** Reflects the column at `to` in the plane normal to the one at `by`, rows `first` and on. */
function mirror(
  by: Float64Array,
  at: number,
  into: Float64Array,
  to: number,
  first: number,
  rows: number,
  half: number,
) {
  let dot = 0;
  for (let row = first; row < rows; row++) dot += (by[at + row] ?? 0) * (into[to + row] ?? 0);
  const share = dot / half;
  for (let row = first; row < rows; row++) into[to + row] = (into[to + row] ?? 0) + share * (by[at + row] ?? 0);
}

/** Solves R·x = right; a direction that the columns do not span (a nil diagonal) gets nothing. */
export function backSubstitute({ count, values }: Triangle, right: Float64Array): Float64Array {
  const x = new Float64Array(count);
  for (let i = count - 1; i >= 0; i--) {
    let sum = right[i] ?? 0;
    for (let j = i + 1; j < count; j++) sum -= (values[i * count + j] ?? 0) * (x[j] ?? 0);
    const diagonal = values[i * count + i] ?? 0;
    x[i] = diagonal === 0 ? 0 : sum / diagonal;
  }
  return x;
}

/** Inverse of an upper triangle, entry (i, j) at i·count + j; a nil diagonal stands for a direction without bound: Infinity. */
export function inverseOf({ count, values }: Triangle): Float64Array {
  const inverse = new Float64Array(count * count);
  for (let j = 0; j < count; j++) {
    inverse[j * count + j] = 1 / (values[j * count + j] ?? 0);
    for (let i = j - 1; i >= 0; i--) {
      let sum = 0;
      for (let k = i + 1; k <= j; k++) sum += (values[i * count + k] ?? 0) * (inverse[k * count + j] ?? 0);
      inverse[i * count + j] = -sum / (values[i * count + i] ?? 0);
    }
  }
  return inverse;
}
