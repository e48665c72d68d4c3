import { log } from '../elementary';
import { EngineError } from '../errors';
import { backSubstitute, householder, type Qr } from '../linalg/qr';
import { addScaled, dot, mean } from '../linalg/vector';
import type { Whitener } from '../noise/whitener';

/** A least-squares fit y = X b + e with Cov(e) = σ² V. */
export interface Fit {
  /** One per column; 0 for a column that depends on earlier ones. */
  readonly coefficients: number[];
  /** X b. */
  readonly fitted: Float64Array;
  /** y − X b. */
  readonly residuals: Float64Array;
  /** Residuals after whitening (the same for V = I). */
  readonly whitenedResiduals: Float64Array;
  readonly rank: number;
  /** Columns that were dropped because they depend on earlier ones. */
  readonly dropped: number[];
  /** Volumes − rank (one less where the noise model has no mean). */
  readonly df: number;
  /** Sum of squared whitened residuals, eᵀV⁻¹e. */
  readonly squares: number;
  /** σ² = squares / df, the variance of one volume; 0 where df is 0. */
  readonly variance: number;
  /** Log-likelihood of normal errors at the maximum-likelihood variance squares / n; Infinity for a perfect fit. */
  readonly logLikelihood: number;
  /** 1 − squares about the fit / squares about the mean, unwhitened; 1 for constant data fitted exactly, else 0. */
  readonly r2: number;
  /** The factors of the whitened columns, for contrasts. */
  readonly qr: Qr;
}

/**
 * Fits by QR: ordinary least squares, or generalised with a whitener W (WVWᵀ = I): OLS of Wy on WX.
 *
 * @param columns p columns, one value per volume
 * @param y one value per volume
 * Errors: `EngineError` for no volumes, unequal lengths, values that are not finite. More columns than volumes, or
 * columns that depend on one another, are no error: the later ones are dropped and named.
 * Source: textbook; checked against NIST's certified examples and statsmodels.
 */
export function fitLeastSquares(columns: readonly Float64Array[], y: Float64Array, whitener?: Whitener): Fit {
  requireData(columns, y);
  const whitened = whitener ? columns.map((column) => whitener.apply(column)) : columns;
  const target = whitener ? whitener.apply(y) : y;
  const qr = householder(whitened);
  const rank = qr.kept.length;
  const turned = columns.length > 0 ? qr.transposed(target) : target.slice();
  const coefficients = new Array<number>(columns.length).fill(0);
  backSubstitute(qr.r, turned.subarray(0, rank)).forEach((value, j) => (coefficients[qr.kept[j]!] = value));

  // The part of the data that the columns cannot reach, turned back: accurate even for a nearly perfect fit.
  turned.fill(0, 0, rank);
  const whitenedResiduals = columns.length > 0 ? qr.forward(turned) : turned;
  const fitted = new Float64Array(y.length);
  columns.forEach((column, j) => addScaled(fitted, column, coefficients[j]!));
  const residuals = whitener ? y.map((value, n) => value - fitted[n]!) : whitenedResiduals;
  // 1/f noise has no finite mean: its whitening takes the mean away, and a degree of freedom with it.
  const n = y.length - (whitener && isBlindToMean(whitener, y.length) ? 1 : 0);
  const df = Math.max(0, n - rank);
  const squares = dot(turned, turned);
  const variance = df > 0 ? squares / df : 0;
  const determinant = whitener?.logDeterminant ?? 0;
  const logLikelihood = -0.5 * n * (log((2 * Math.PI * squares) / n) + 1) - 0.5 * determinant;
  return {
    coefficients,
    fitted,
    residuals,
    whitenedResiduals,
    rank,
    dropped: qr.dropped,
    df,
    squares,
    variance,
    logLikelihood,
    r2: shareExplained(y, residuals),
    qr
  };
}

function isBlindToMean(whitener: Whitener, volumes: number): boolean {
  const rest = whitener.apply(new Float64Array(volumes).fill(1));
  return dot(rest, rest) < 1e-12 * volumes;
}

function shareExplained(y: Float64Array, residuals: Float64Array): number {
  const middle = mean(y);
  let total = 0;
  for (const value of y) total += (value - middle) ** 2;
  const left = dot(residuals, residuals);
  if (total > 0) return 1 - left / total;
  return left <= 1e-20 * dot(y, y) ? 1 : 0;
}

/** Throws unless there is data of one length, all finite. */
export function requireData(columns: readonly Float64Array[], y: Float64Array): void {
  if (y.length === 0)
    throw new EngineError('number of volumes', 0, 'at least 1', 'Give the signal of the region.');
  for (let n = 0; n < y.length; n++)
    if (!Number.isFinite(y[n]!))
      throw new EngineError(
        `signal at volume ${n}`,
        y[n],
        'a finite number',
        'Fill the gap or cut the run there.'
      );
  columns.forEach((column, j) => {
    if (column.length !== y.length)
      throw new EngineError(
        `length of column ${j + 1}`,
        column.length,
        `${y.length} values, one per volume`,
        'Make columns and signal for the same run.'
      );
    for (const value of column)
      if (!Number.isFinite(value))
        throw new EngineError(`column ${j + 1}`, value, 'finite numbers', 'Fill or drop the gaps.');
  });
}
