import { EngineError, requireWhole } from '../errors';
import { dot } from '../linalg/vector';

/**
 * Autocorrelation of residuals at lags 0 … `lags`: r_k = Σ e_t e_{t+k} / Σ e_t². All zeros for residuals of 0.
 * (Residuals of a fit are biased towards negative values by the columns taken out; REML is not.)
 * @example autocorrelation(Float64Array.of(1, -1, 1, -1), 1) // [1, -0.75]
 */
export function autocorrelation(residuals: Float64Array, lags: number): Float64Array {
  requireWhole('number of lags', lags, 0, 'Use 1 for neighbouring volumes.');
  if (lags >= residuals.length)
    throw new EngineError(
      'number of lags',
      lags,
      `fewer than the ${residuals.length} volumes`,
      'Use fewer lags.'
    );
  const total = dot(residuals, residuals);
  return Float64Array.from({ length: lags + 1 }, (_, k) =>
    total > 0 ? dot(residuals.subarray(0, residuals.length - k), residuals.subarray(k)) / total : 0
  );
}

/** Durbin–Watson statistic Σ (e_t − e_{t−1})² / Σ e_t²: near 2 for white noise; 2 for residuals of 0. */
export function durbinWatson(residuals: Float64Array): number {
  let changes = 0;
  for (let t = 1; t < residuals.length; t++) changes += (residuals[t]! - residuals[t - 1]!) ** 2;
  const total = dot(residuals, residuals);
  return total > 0 ? changes / total : 2;
}
