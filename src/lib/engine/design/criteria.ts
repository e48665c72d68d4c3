import { choleskyFactor } from '../linalg/cholesky';
import { exp, log } from '../elementary';
import { requireContrast } from './contrast';
import { readContrast, type RowSpace } from './row-space';

/** How well a set of contrasts is measured together. */
export interface Criteria {
  /** rows / trace(C M⁻¹ Cᵀ); 0 where a row is not estimable. */
  a: number;
  /** det(C M⁻¹ Cᵀ)^(−1/rows); 0 where a row is not estimable or the rows depend on each other. */
  d: number;
  /** Why a or d is 0, else null. */
  reason: string | null;
}

/**
 * A and D criteria of a set of contrasts.
 * @param space the information matrix taken apart (`rowSpaceOf`)
 * @param rows C, each one weight per column
 * Source: Kao MH, Mandal A, Lazar N, Stufken J (2009) Multi-objective optimal experimental designs for event-related
 * fMRI studies. NeuroImage 44:849–856 (criteria; formulas checked by the reference values).
 */
export function criteriaOf(space: RowSpace, rows: readonly (readonly number[])[]): Criteria {
  if (rows.length === 0) return { a: 0, d: 0, reason: 'The set holds no contrast.' };
  const columns = space.inverseLengths.length;
  rows.forEach((weights, r) => requireContrast({ name: `row ${r + 1}`, weights: [...weights] }, columns));
  const readings = rows.map((row) => readContrast(space, row));
  const blind = readings.findIndex((reading) => !reading.estimable);
  if (blind >= 0) return { a: 0, d: 0, reason: `Contrast ${blind + 1} of the set cannot be estimated.` };

  const a = rows.length / readings.reduce((trace, { variance }) => trace + variance, 0);
  const factor = rows.length > space.rank ? null : choleskyFactor(covarianceOf(space, rows), INDEPENDENT);
  if (factor === null)
    return { a, d: 0, reason: 'The contrasts of the set depend on each other, so they have no D criterion.' };
  const logDeterminant = factor.reduce((sum, row, i) => sum + 2 * log(row[i]!), 0);
  return { a, d: exp(-logDeterminant / rows.length), reason: null };
}

/** Share of its variance that a contrast must keep beside the earlier ones to count as one of its own. */
const INDEPENDENT = 1e-10;

/** C M⁺ Cᵀ for estimable rows. */
export function covarianceOf(space: RowSpace, rows: readonly (readonly number[])[]): number[][] {
  const shares = rows.map((row) => {
    const scaled = row.map((weight, j) => weight * space.inverseLengths[j]!);
    return space.vectors
      .slice(0, space.rank)
      .map(
        (vector, k) =>
          scaled.reduce((sum, value, j) => sum + value * vector[j]!, 0) / Math.sqrt(space.values[k]!)
      );
  });
  return shares.map((x) => shares.map((y) => x.reduce((sum, value, k) => sum + value * y[k]!, 0)));
}

/**
 * One contrast between conditions, asked of every lag: c ⊗ I, `members` rows.
 * @example overMembers([1, -1], 2) // [1, 0, -1, 0], [0, 1, 0, -1]
 */
export function overMembers(weights: readonly number[], members: number): number[][] {
  return Array.from({ length: members }, (_, k) =>
    weights.flatMap((weight) => Array.from({ length: members }, (_value, j) => (j === k ? weight : 0)))
  );
}

/** All columns, one contrast each. */
export function identityRows(columns: number): number[][] {
  return overMembers([1], columns);
}

/**
 * Each condition against baseline and every pair of conditions: Q + Q(Q−1)/2 rows.
 * @example individualAndPairs(2) // [1, 0], [0, 1], [1, -1]
 */
export function individualAndPairs(conditions: number): number[][] {
  const unit = (j: number): number[] => Array.from({ length: conditions }, (_, i) => (i === j ? 1 : 0));
  const rows = Array.from({ length: conditions }, (_, j) => unit(j));
  for (let i = 0; i < conditions; i += 1)
    for (let j = i + 1; j < conditions; j += 1) rows.push(unit(i).map((value, k) => value - unit(j)[k]!));
  return rows;
}

/**
 * Detection power of one condition from its estimation columns: R = h₀ᵀM h₀ / h₀ᵀh₀ with h₀ the assumed response at
 * the lags. Blocks make it large, random orders small.
 * Source: Liu TT, Frank LR, Wong EC, Buxton RB (2001) NeuroImage 13:759–773.
 * @param information K × K
 * @param shape h₀, K numbers; all 0 gives 0
 * @example detectionPower([[2, 0], [0, 4]], [1, 1]) // 3
 */
export function detectionPower(
  information: readonly (readonly number[])[],
  shape: readonly number[]
): number {
  const length = shape.reduce((sum, value) => sum + value * value, 0);
  if (length === 0) return 0;
  let form = 0;
  information.forEach((row, i) => row.forEach((value, j) => (form += shape[i]! * value * shape[j]!)));
  return form / length;
}
