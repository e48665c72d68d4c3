import { addScaled, dot, norm } from './vector';

/**
 * A = Q R by Householder reflections. Columns that depend on earlier ones (to `DEPENDENT` of their length) are dropped,
 * so R is square and regular: rank × rank, upper triangular, in the order of the kept columns.
 */
export interface Qr {
  /** Rows of A. */
  readonly rows: number;
  readonly kept: number[];
  readonly dropped: number[];
  /** r[j]: column j of R, entries 0 … j. */
  readonly r: number[][];
  /** For each dropped column, its coordinates on the kept ones. */
  readonly dependence: number[][];
  /** Qᵀ y, all `rows` entries: the first rank belong to the columns, the rest to the residual. */
  transposed(y: Float64Array): Float64Array;
  /** Q z, the way back. */
  forward(z: Float64Array): Float64Array;
}

/** What is left of a column below this share of its length brings nothing new. */
const DEPENDENT = 1e-10;

/**
 * Factors a list of columns of one length.
 * Source: Golub GH, Van Loan CF, Matrix Computations, section 5.2 (from memory; Q·R = A is tested).
 * @param columns p columns of length n; p may exceed n
 */
export function householder(columns: readonly Float64Array[]): Qr {
  const rows = columns[0]?.length ?? 0;
  const reflectors: Float64Array[] = [];
  const kept: number[] = [];
  const dropped: number[] = [];
  const r: number[][] = [];
  const tops: number[][] = [];
  columns.forEach((column, index) => {
    const rest = column.slice();
    for (const reflector of reflectors) reflect(rest, reflector);
    const rank = kept.length;
    const below = rest.subarray(rank);
    const length = norm(below);
    if (!(length > DEPENDENT * norm(column))) {
      dropped.push(index);
      tops.push(Array.from(rest.subarray(0, rank)));
      return;
    }
    // The sign that avoids cancellation.
    const diagonal = below[0]! > 0 ? -length : length;
    const reflector = new Float64Array(rows);
    reflector.set(below, rank);
    reflector[rank]! -= diagonal;
    const size = norm(reflector);
    reflectors.push(reflector.map((value) => value / size));
    r.push([...rest.subarray(0, rank), diagonal]);
    kept.push(index);
  });
  const dependence = tops.map((top) => backSubstitute(r, top));
  return {
    rows,
    kept,
    dropped,
    r,
    dependence,
    transposed(y) {
      const out = y.slice();
      for (const reflector of reflectors) reflect(out, reflector);
      return out;
    },
    forward(z) {
      const out = z.slice();
      for (let k = reflectors.length - 1; k >= 0; k--) reflect(out, reflectors[k]!);
      return out;
    }
  };
}

/** x ← x − 2 v (v·x). */
function reflect(x: Float64Array, v: Float64Array): void {
  addScaled(x, v, -2 * dot(v, x));
}

/** Solves R b = z for upper triangular R (columns r[j]); z may be shorter than R: zeros follow. */
export function backSubstitute(r: readonly (readonly number[])[], z: ArrayLike<number>): number[] {
  const out = r.map((_, j) => (j < z.length ? z[j]! : 0));
  for (let j = r.length - 1; j >= 0; j--) {
    out[j]! /= r[j]![j]!;
    for (let i = 0; i < j; i++) out[i]! -= out[j]! * r[j]![i]!;
  }
  return out;
}

/** Solves Rᵀ b = c for upper triangular R (columns r[j]). */
export function forwardSubstitute(r: readonly (readonly number[])[], c: ArrayLike<number>): number[] {
  const out: number[] = [];
  for (let j = 0; j < r.length; j++) {
    let rest = c[j]!;
    for (let i = 0; i < j; i++) rest -= r[j]![i]! * out[i]!;
    out.push(rest / r[j]![j]!);
  }
  return out;
}
