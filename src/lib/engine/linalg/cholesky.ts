/**
 * L with L·Lᵀ = A for a symmetric positive definite matrix, rows of growing length; null as soon as a pivot falls to
 * `floor` times its diagonal entry or below (the row depends on earlier ones).
 *
 * Only the lower triangle is read. Source: textbook.
 * @example choleskyFactor([[4, 2], [2, 5]]) // [[2], [1, 2]]
 */
export function choleskyFactor(matrix: readonly (readonly number[])[], floor = 1e-12): number[][] | null {
  const rows: number[][] = [];
  for (let i = 0; i < matrix.length; i += 1) {
    const row: number[] = [];
    for (let j = 0; j <= i; j += 1) {
      const other = j === i ? row : rows[j]!;
      let rest = matrix[i]![j]!;
      for (let k = 0; k < j; k += 1) rest -= row[k]! * other[k]!;
      if (j < i) row.push(rest / other[j]!);
      else if (rest > floor * matrix[i]![i]!) row.push(Math.sqrt(rest));
      else return null;
    }
    rows.push(row);
  }
  return rows;
}

/** The diagonal of A⁻¹ from its factor L: sums of squares of the columns of L⁻¹. */
export function inverseDiagonal(factor: readonly (readonly number[])[]): number[] {
  const size = factor.length;
  const out = new Array<number>(size).fill(0);
  const column = new Float64Array(size);
  for (let j = 0; j < size; j += 1) {
    for (let i = j; i < size; i += 1) {
      const row = factor[i]!;
      let rest = i === j ? 1 : 0;
      for (let k = j; k < i; k += 1) rest -= row[k]! * column[k]!;
      column[i] = rest / row[i]!;
      out[j]! += column[i]! * column[i]!;
    }
  }
  return out;
}
