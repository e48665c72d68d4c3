import { projectOut } from '../linalg/basis';
import { dot, gram, norm } from '../linalg/vector';
import { requireColumn, whiten, type Column, type Setting } from './setting';

/** What one run says about its columns. */
export interface RunInformation {
  /** M = XᵀWᵀPWX, p × p. */
  matrix: number[][];
  /** Length of each whitened column before the nuisance is projected out. */
  lengths: number[];
  /** W·X, columns. */
  whitened: Float64Array[];
}

/** A column whose whitened part outside the nuisance is below this share of its length lies in the nuisance. */
export const INSIDE_NUISANCE = 1e-8;

/**
 * M = XᵀWᵀPWX of one run: W whitens, P projects onto the complement of the whitened nuisance, so that noise of
 * variance 1 is meant. Formed as RᵀR of the projected columns R = PWX (projected twice), which keeps the digits that
 * the subtraction XᵀV⁻¹X − … would lose.
 *
 * A column that lies in the nuisance (to `INSIDE_NUISANCE` of its length) gets exact zeros.
 */
export function runInformation(columns: readonly Column[], setting: Setting): RunInformation {
  const whitened = columns.map((column) =>
    whiten(setting.whitener, requireColumn(column, setting.base.volumes).values)
  );
  const lengths = whitened.map(norm);
  const rest = whitened.map((column, j) => {
    const residual = residualOf(column, setting.whitened.q);
    return norm(residual) <= INSIDE_NUISANCE * lengths[j]! ? residual.fill(0) : residual;
  });
  return { matrix: gram(rest), lengths, whitened };
}

/** column − Q Qᵀ column, twice for full accuracy; a new array. */
export function residualOf(column: Float64Array, q: readonly Float64Array[]): Float64Array {
  const rest = column.slice();
  const before = dot(rest, rest);
  projectOut(rest, q);
  // The second pass only matters when most of the column was taken away.
  if (dot(rest, rest) < 0.5 * before) projectOut(rest, q);
  return rest;
}

/** Element-wise sum of information matrices: runs are independent. */
export function addInformation(matrices: readonly (readonly (readonly number[])[])[]): number[][] {
  const size = matrices[0]?.length ?? 0;
  return Array.from({ length: size }, (_, i) =>
    Array.from({ length: size }, (_value, j) => matrices.reduce((sum, matrix) => sum + matrix[i]![j]!, 0))
  );
}
