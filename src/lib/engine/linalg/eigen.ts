/** Eigenvalues in falling order, and their eigenvectors: `vectors[k]` has length 1 and belongs to `values[k]`. */
export interface Eigen {
  values: number[];
  vectors: Float64Array[];
}

/**
 * Eigen-decomposition of a symmetric matrix by cyclic Jacobi rotations: slow for hundreds of columns, but accurate to
 * rounding for small ones, built from + − × ÷ √ only and so the same on every machine.
 *
 * Only the upper triangle is read. Eigenvectors are signed so that their largest entry is positive.
 * Source: Golub GH, Van Loan CF, Matrix Computations, section 8.5 (from memory; A·v = λ·v is tested).
 * @param matrix p × p, symmetric
 * @example eigenSymmetric([[2, 1], [1, 2]]).values // 3, 1
 */
export function eigenSymmetric(matrix: readonly (readonly number[])[]): Eigen {
  const size = matrix.length;
  const a = matrix.map((row) => Float64Array.from(row));
  for (let i = 0; i < size; i += 1) for (let j = 0; j < i; j += 1) a[i]![j] = a[j]![i]!;
  const vectors = Array.from({ length: size }, (_, i) => {
    const vector = new Float64Array(size);
    vector[i] = 1;
    return vector;
  });
  for (let sweep = 0; sweep < 60; sweep += 1) {
    let rotated = false;
    for (let i = 0; i < size - 1; i += 1)
      for (let j = i + 1; j < size; j += 1) if (rotate(a, vectors, i, j)) rotated = true;
    if (!rotated) break;
  }
  const order = Array.from({ length: size }, (_, i) => i).sort((x, y) => a[y]![y]! - a[x]![x]! || x - y);
  return {
    values: order.map((i) => a[i]![i]!),
    vectors: order.map((i) => signed(vectors[i]!))
  };
}

/** Turns rows and columns i and j so that a[i][j] becomes 0; false when it is negligible already. */
function rotate(a: Float64Array[], vectors: Float64Array[], i: number, j: number): boolean {
  const rowI = a[i]!;
  const rowJ = a[j]!;
  const off = rowI[j]!;
  if (off === 0) return false;
  // Below rounding of both diagonal entries a rotation would change nothing.
  if (Math.abs(off) <= 1e-18 * Math.sqrt(Math.abs(rowI[i]! * rowJ[j]!))) return clear(rowI, rowJ, i, j);
  const theta = (rowJ[j]! - rowI[i]!) / (2 * off);
  const t = (theta >= 0 ? 1 : -1) / (Math.abs(theta) + Math.sqrt(theta * theta + 1));
  const c = 1 / Math.sqrt(t * t + 1);
  const s = t * c;
  rowI[i]! -= t * off;
  rowJ[j]! += t * off;
  clear(rowI, rowJ, i, j);
  for (let k = 0; k < a.length; k += 1) {
    if (k === i || k === j) continue;
    const row = a[k]!;
    const x = row[i]!;
    const y = row[j]!;
    row[i] = rowI[k] = c * x - s * y;
    row[j] = rowJ[k] = s * x + c * y;
  }
  const vectorI = vectors[i]!;
  const vectorJ = vectors[j]!;
  for (let k = 0; k < vectorI.length; k += 1) {
    const x = vectorI[k]!;
    const y = vectorJ[k]!;
    vectorI[k] = c * x - s * y;
    vectorJ[k] = s * x + c * y;
  }
  return true;
}

function clear(rowI: Float64Array, rowJ: Float64Array, i: number, j: number): false {
  rowI[j] = 0;
  rowJ[i] = 0;
  return false;
}

function signed(vector: Float64Array): Float64Array {
  let largest = 0;
  for (const value of vector) if (Math.abs(value) > Math.abs(largest) + 1e-12) largest = value;
  return largest < 0 ? vector.map((value) => -value) : vector;
}
