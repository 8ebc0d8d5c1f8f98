/** Upper triangular factor, column by column: column j holds rows 0 to n − 1, zero below the diagonal. */
export type Triangle = readonly Float64Array[];

export interface Reduced {
  readonly triangle: Triangle;
  /** Qᵀ·b, its first n entries. */
  readonly right: Float64Array;
}

/**
 * Reduces A·x ≈ b to R·x ≈ Qᵀb by Householder reflections. The columns and a copy of b are worked on in place.
 *
 * @param columns n columns of A, each of m ≥ n rows; overwritten
 * Source: Householder, J. ACM 5 (1958) 339 (mem).
 */
export function reduceColumns(columns: readonly Float64Array[], b: Float64Array): Reduced {
  const count = columns.length;
  const side = Float64Array.from(b);
  columns.forEach((pivot, k) => {
    const rows = pivot.length;
    let norm = 0;
    for (let i = k; i < rows; i++) norm += (pivot[i] ?? 0) ** 2;
    norm = Math.sqrt(norm);
    if (norm === 0) return;
    const lead = pivot[k] ?? 0;
    const alpha = lead > 0 ? -norm : norm;
    pivot[k] = lead - alpha;
    const scale = 1 / (alpha * (lead - alpha));
    for (let j = k + 1; j <= count; j++) {
      const column = j < count ? columns[j] : side;
      if (!column) continue;
      let dot = 0;
      for (let i = k; i < rows; i++) dot += (pivot[i] ?? 0) * (column[i] ?? 0);
      dot *= scale;
      for (let i = k; i < rows; i++) column[i] = (column[i] ?? 0) + dot * (pivot[i] ?? 0);
    }
    pivot[k] = alpha;
  });
  const triangle = columns.map((column, j) => {
    const top = new Float64Array(count);
    for (let i = 0; i <= j; i++) top[i] = column[i] ?? 0;
    return top;
  });
  return { triangle, right: side.subarray(0, count) };
}
