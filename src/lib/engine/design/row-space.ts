import { eigenSymmetric } from '../linalg/eigen';
import { norm } from '../linalg/vector';

/**
 * An information matrix taken apart, so that estimability and efficiency of any contrast are quick to read.
 *
 * M is first scaled to unit diagonal, S = D^(−½) M D^(−½), so that the tolerances do not depend on the units of the
 * columns: an eigenvalue of S at or below `RANK_TOLERANCE` times the number of columns counts as 0 (rounding leaves
 * about 1e-15), and a contrast is estimable when at most `ESTIMABLE_TOLERANCE` of the length of D^(−½)c lies in the
 * null space.
 */
export interface RowSpace {
  /** D^(−½), 0 for a column without information. */
  inverseLengths: number[];
  values: number[];
  vectors: Float64Array[];
  rank: number;
  /** √(λ₁/λₚ) of S, Infinity when the rank is short: the condition number of the scaled, projected columns. */
  condition: number;
}

export const RANK_TOLERANCE = 1e-11;
export const ESTIMABLE_TOLERANCE = 1e-6;

/** Takes M (p × p, symmetric, positive semi-definite) apart. A zero diagonal entry is a column without information. */
export function rowSpaceOf(matrix: readonly (readonly number[])[]): RowSpace {
  const size = matrix.length;
  const inverseLengths = matrix.map((row, i) => (row[i]! > 0 ? 1 / Math.sqrt(row[i]!) : 0));
  const scaled = matrix.map((row, i) =>
    row.map((value, j) => (i === j && value > 0 ? 1 : value * inverseLengths[i]! * inverseLengths[j]!))
  );
  const { values, vectors } = eigenSymmetric(scaled);
  const rank = values.filter((value) => value > RANK_TOLERANCE * size).length;
  const condition = size === 0 ? 1 : rank < size ? Infinity : Math.sqrt(values[0]! / values[size - 1]!);
  return { inverseLengths, values, vectors, rank, condition };
}

/** What a contrast's weights look like in the scaled space. */
export interface ContrastReading {
  estimable: boolean;
  /** c M⁺ cᵀ where estimable, else Infinity. */
  variance: number;
  /** For a contrast that is not estimable: a direction a (weights on columns) with c·a ≠ 0 and M a = 0. */
  blind: number[];
}

/**
 * Variance c M⁺ cᵀ of a contrast, where c lies in the row space of M; otherwise the direction the design is blind to.
 * Any generalised inverse gives the same variance for an estimable contrast, so the scaling does no harm.
 */
export function readContrast(space: RowSpace, weights: readonly number[]): ContrastReading {
  const scaled = weights.map((weight, j) => {
    const factor = space.inverseLengths[j]!;
    return factor > 0 ? weight * factor : weight;
  });
  const length = norm(Float64Array.from(scaled));
  const direction = new Array<number>(weights.length).fill(0);
  let variance = 0;
  space.vectors.forEach((vector, k) => {
    let share = 0;
    for (let j = 0; j < scaled.length; j += 1) share += vector[j]! * scaled[j]!;
    if (k < space.rank) variance += (share * share) / space.values[k]!;
    else for (let j = 0; j < scaled.length; j += 1) direction[j]! += share * vector[j]!;
  });
  if (norm(Float64Array.from(direction)) <= ESTIMABLE_TOLERANCE * length && length > 0)
    return { estimable: true, variance, blind: [] };
  const blind = direction.map((value, j) => value * (space.inverseLengths[j]! || 1));
  return { estimable: false, variance: Infinity, blind };
}
