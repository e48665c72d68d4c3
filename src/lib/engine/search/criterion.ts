/**
 * The A criterion rows / trace(C M⁻¹ Cᵀ), read from M by a square-root-free Cholesky factor M = L D Lᵀ.
 *
 * `score` is made for millions of calls: it allocates nothing. A matrix that is singular to rounding scores 0.
 */
export class Criterion {
  private readonly size: number;
  private readonly rows: number;
  /** B = CᵀC; trace(C M⁻¹ Cᵀ) = trace(B M⁻¹). */
  private readonly weights: Float64Array;
  private readonly factor: Float64Array;
  private readonly inverse: Float64Array;

  /** @param contrasts rows of weights on the columns of M */
  constructor(contrasts: readonly (readonly number[])[]) {
    const size = contrasts[0]?.length ?? 0;
    this.size = size;
    this.rows = contrasts.length;
    this.weights = new Float64Array(size * size);
    for (const row of contrasts)
      for (let i = 0; i < size; i++)
        for (let j = 0; j < size; j++) this.weights[i * size + j]! += row[i]! * row[j]!;
    this.factor = new Float64Array(size * size);
    this.inverse = new Float64Array(size);
  }

  /** @param m size × size, row by row; only the lower triangle is read */
  score(m: Float64Array): number {
    const { size, factor, weights, inverse } = this;
    // factor: below the diagonal L, on it D.
    for (let i = 0; i < size; i++) {
      const row = i * size;
      for (let j = 0; j < i; j++) {
        let sum = m[row + j]!;
        for (let k = 0; k < j; k++) sum -= factor[row + k]! * factor[j * size + k]! * factor[k * size + k]!;
        factor[row + j] = sum / factor[j * size + j]!;
      }
      let d = m[row + i]!;
      for (let k = 0; k < i; k++) d -= factor[row + k]! * factor[row + k]! * factor[k * size + k]!;
      // A column without events matters to no contrast of weight 0 there.
      if (m[row + i] === 0 && weights[row + i] === 0) d = 1;
      else if (!(d > 1e-10 * m[row + i]!)) return 0;
      factor[row + i] = d;
    }
    // Row k of L⁻¹ at a time: trace(B M⁻¹) = Σₖ rₖ B rₖᵀ / dₖ.
    let trace = 0;
    for (let k = 0; k < size; k++) {
      inverse[k] = 1;
      for (let j = k - 1; j >= 0; j--) {
        let sum = 0;
        for (let i = j + 1; i <= k; i++) sum += inverse[i]! * factor[i * size + j]!;
        inverse[j] = -sum;
      }
      let form = 0;
      for (let i = 0; i <= k; i++) {
        let sum = 0.5 * weights[i * size + i]! * inverse[i]!;
        for (let j = 0; j < i; j++) sum += weights[i * size + j]! * inverse[j]!;
        form += inverse[i]! * sum;
      }
      trace += (2 * form) / factor[k * size + k]!;
    }
    return trace > 0 ? this.rows / trace : 0;
  }
}
