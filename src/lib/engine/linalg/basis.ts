import { addScaled, dot, norm } from './vector';

/** An orthonormal basis of the space a list of columns spans. */
export interface Basis {
  /** Orthonormal columns, as many as the rank. */
  q: Float64Array[];
  /** Which given columns brought a direction of their own, in order. */
  kept: number[];
  /** For each kept column j: its coordinates on q[0…j] (upper triangular: column = Σ q[i]·r[j][i]). */
  r: number[][];
}

/** A column whose part outside the earlier ones is below this share of its length brings nothing new. */
export const DEPENDENT = 1e-9;

/**
 * Gram–Schmidt with re-orthogonalisation ("twice is enough"), dropping columns that depend on earlier ones.
 *
 * Source: Giraud L, Langou J, Rozložník M (2005) The loss of orthogonality in the Gram–Schmidt orthogonalization
 * process. Comput Math Appl 50:1069–1075 (from memory); orthogonality to rounding is tested.
 * @param columns any number of columns of one length; zero columns are dropped
 */
export function orthonormalBasis(columns: readonly Float64Array[]): Basis {
  const q: Float64Array[] = [];
  const kept: number[] = [];
  const r: number[][] = [];
  columns.forEach((column, index) => {
    const length = norm(column);
    if (length === 0) return;
    const rest = column.slice();
    const coordinates = projectOut(rest, q);
    projectOut(rest, q).forEach((value, i) => (coordinates[i]! += value));
    const left = norm(rest);
    if (left <= DEPENDENT * length) return;
    coordinates.push(left);
    q.push(rest.map((value) => value / left));
    kept.push(index);
    r.push(coordinates);
  });
  return { q, kept, r };
}

/** column ← column − Q Qᵀ column, in place; returns Qᵀ column (one pass of modified Gram–Schmidt). */
export function projectOut(column: Float64Array, q: readonly Float64Array[]): number[] {
  return q.map((direction) => {
    const share = dot(direction, column);
    addScaled(column, direction, -share);
    return share;
  });
}

/** Coefficients on the kept columns of the projection of `vector` onto the basis, by back substitution. */
export function coefficientsOn(basis: Basis, vector: Float64Array): number[] {
  const size = basis.q.length;
  const out = basis.q.map((direction) => dot(direction, vector));
  for (let j = size - 1; j >= 0; j -= 1) {
    out[j]! /= basis.r[j]![j]!;
    for (let i = 0; i < j; i += 1) out[i]! -= out[j]! * basis.r[j]![i]!;
  }
  return out;
}
