/** Plain dense linear algebra for tests: the slow, obvious way that the engine's structured one is held against. */

/** V of a stationary autocorrelation r(lag), N × N. */
export function toeplitz(volumes: number, r: (lag: number) => number): number[][] {
  return Array.from({ length: volumes }, (_, i) =>
    Array.from({ length: volumes }, (_value, j) => r(Math.abs(i - j)))
  );
}

/** Inverse by Gauss–Jordan elimination with row pivoting. */
export function inverse(matrix: readonly (readonly number[])[]): number[][] {
  const size = matrix.length;
  const work = matrix.map((row, i) => [...row, ...Array.from({ length: size }, (_, j) => (i === j ? 1 : 0))]);
  for (let c = 0; c < size; c += 1) {
    let best = c;
    for (let r = c; r < size; r += 1) if (Math.abs(work[r]![c]!) > Math.abs(work[best]![c]!)) best = r;
    [work[c], work[best]] = [work[best]!, work[c]!];
    const pivot = work[c]![c]!;
    work[c] = work[c]!.map((value) => value / pivot);
    for (let r = 0; r < size; r += 1) {
      const factor = work[r]![c]!;
      if (r !== c && factor !== 0) work[r] = work[r]!.map((value, k) => value - factor * work[c]![k]!);
    }
  }
  return work.map((row) => row.slice(size));
}

/** A·B for column lists Aᵀ and B: entry (i, j) is aᵢ·bⱼ. */
export function crossProducts(a: readonly ArrayLike<number>[], b: readonly ArrayLike<number>[]): number[][] {
  return a.map((x) =>
    b.map((y) => {
      let sum = 0;
      for (let i = 0; i < x.length; i += 1) sum += x[i]! * y[i]!;
      return sum;
    })
  );
}

/** matrix · column. */
export function times(matrix: readonly (readonly number[])[], column: ArrayLike<number>): number[] {
  return matrix.map((row) => row.reduce((sum, value, j) => sum + value * column[j]!, 0));
}

/** M = XᵀV⁻¹X − XᵀV⁻¹K (KᵀV⁻¹K)⁻¹ KᵀV⁻¹X, straight from the definition. */
export function denseInformation(
  columns: readonly ArrayLike<number>[],
  nuisance: readonly ArrayLike<number>[],
  v: readonly (readonly number[])[]
): number[][] {
  const precision = inverse(v);
  const px = columns.map((column) => times(precision, column));
  const xx = crossProducts(columns, px);
  const kx = crossProducts(nuisance, px);
  const kk = crossProducts(
    nuisance,
    nuisance.map((column) => times(precision, column))
  );
  const solved = inverse(kk);
  return xx.map((row, i) =>
    row.map((value, j) => {
      const right = times(
        solved,
        kx.map((entries) => entries[j]!)
      );
      return value - kx.reduce((sum, entries, k) => sum + entries[i]! * right[k]!, 0);
    })
  );
}
