import { choleskyFactor, inverseDiagonal } from '../linalg/cholesky';
import { eigenSymmetric } from '../linalg/eigen';
import { RANK_TOLERANCE } from './row-space';

/**
 * Pearson correlations from the cross products of centred columns, p × p. A constant column correlates 0 with the
 * others and 1 with itself; `squares` (sums of squares before centring) tell it from one that merely varies little.
 */
export function correlationsFrom(
  cross: readonly (readonly number[])[],
  squares: readonly number[]
): number[][] {
  return scaledToUnitDiagonal(cross, squares);
}

/**
 * Variance inflation from a residual cross-product matrix: VIFⱼ = totalⱼ · (G⁻¹)ⱼⱼ = 1/(1 − Rⱼ²), where G holds the
 * cross products of the columns after the nuisance is taken out and `totals` their centred sums of squares.
 *
 * `squares` are the sums of squares before anything is taken out: the yardstick for "nothing left".
 *
 * Infinity for a column that is a sum of others (or of the nuisance), and for one that is constant.
 * Source: 1/(1 − R²), textbook; the inverse-matrix form is an identity that the tests check by regression.
 */
export function inflationFrom(
  cross: readonly (readonly number[])[],
  totals: readonly number[],
  squares: readonly number[]
): number[] {
  const scaled = scaledToUnitDiagonal(cross, squares);
  const isLeft = (j: number) => cross[j]![j]! > NOTHING_LEFT * squares[j]!;
  const inverse = inverseDiagonalOf(scaled);
  return totals.map((total, j) => (isLeft(j) ? (total / cross[j]![j]!) * inverse[j]! : Infinity));
}

/** Diagonal of the inverse of a correlation matrix; Infinity for columns that take part in a dependence. */
function inverseDiagonalOf(scaled: readonly (readonly number[])[]): number[] {
  const factor = choleskyFactor(scaled, WELL_CONDITIONED);
  if (factor) return inverseDiagonal(factor);
  const { values, vectors } = eigenSymmetric(scaled);
  return scaled.map((_, j) => {
    let inverse = 0;
    for (let k = 0; k < values.length; k += 1) {
      const share = vectors[k]![j]! * vectors[k]![j]!;
      if (values[k]! > RANK_TOLERANCE * values.length) inverse += share / values[k]!;
      // Rounding leaves shares of about 1e-15 in columns that have no part in a dependence.
      else if (share > 1e-12) return Infinity;
    }
    return inverse;
  });
}

/** A pivot this large leaves the quick way nine digits; below it the eigenvectors decide. */
const WELL_CONDITIONED = 1e-6;
/** Squared share of a column below which nothing is left of it beside the nuisance. */
const NOTHING_LEFT = 1e-16;

function scaledToUnitDiagonal(cross: readonly (readonly number[])[], sizes: readonly number[]): number[][] {
  const inverse = cross.map((row, j) => {
    const own = row[j]!;
    return own > NOTHING_LEFT * sizes[j]! ? 1 / Math.sqrt(own) : 0;
  });
  return cross.map((row, i) =>
    row.map((value, j) => (i === j ? 1 : clamp(value * inverse[i]! * inverse[j]!)))
  );
}

/** Rounding must not push a correlation past 1. */
function clamp(value: number): number {
  return Math.max(-1, Math.min(1, value));
}
