import { EngineError } from '../errors';
import { log } from '../elementary';
import type { TimeBase, Whitener } from './whitener';

/**
 * Whitening of a given autocorrelation r₁, r₂, … (0 beyond the list): the Durbin–Levinson recursion predicts each
 * volume from those before it and returns the prediction error over its standard deviation, which is the inverse of
 * V's Cholesky factor. Predictors are made once and stop growing when they stop changing (a list that ends soon
 * needs a few dozen coefficients); V itself is never formed or inverted. Even times only.
 *
 * Errors: `EngineError` where the list is no autocorrelation (V not positive definite) or the times are uneven.
 * Source: Durbin 1960, Levinson 1947; Golub GH, Van Loan CF, Matrix Computations, section 4.7 (from memory).
 */
export function givenWhitener(correlations: readonly number[], base: TimeBase): Whitener {
  const { volumes } = base;
  if (base.times !== null)
    throw new EngineError(
      'given autocorrelation',
      'uneven volume times',
      'even times',
      'Use AR(1) noise here.'
    );
  const r = (lag: number) => (lag === 0 ? 1 : (correlations[lag - 1] ?? 0));
  const predictors: Float64Array[] = [new Float64Array(0)];
  const scales = new Float64Array(volumes).fill(1);
  let variance = 1;
  let logDeterminant = 0;
  let quiet = 0;
  for (let n = 1; n < volumes; n += 1) {
    const before = predictors[n - 1]!;
    if (quiet > correlations.length) {
      // The predictor has stopped changing: what lies further back no longer counts.
      predictors.push(before);
      scales[n] = scales[n - 1]!;
      logDeterminant += log(variance);
      continue;
    }
    let left = r(n);
    for (let k = 0; k < n - 1; k += 1) left -= before[k]! * r(n - 1 - k);
    const partial = left / variance;
    quiet = Math.abs(partial) < SILENT ? quiet + 1 : 0;
    variance *= 1 - partial * partial;
    if (!(variance > 1e-12))
      throw new EngineError(
        `given autocorrelation up to lag ${n}`,
        r(n),
        'values that some noise can have (a positive definite matrix)',
        'Estimate them from data, or let them fall off to 0.'
      );
    const here = new Float64Array(n);
    for (let k = 0; k < n - 1; k += 1) here[k] = before[k]! - partial * before[n - 2 - k]!;
    here[n - 1] = partial;
    predictors.push(here);
    scales[n] = 1 / Math.sqrt(variance);
    logDeterminant += log(variance);
  }

  function apply(column: Float64Array): Float64Array {
    return column.map((value, n) => {
      const predictor = predictors[n]!;
      let rest = value;
      for (let k = 0; k < predictor.length; k += 1) rest -= predictor[k]! * column[n - 1 - k]!;
      return rest * scales[n]!;
    });
  }
  return { apply, logDeterminant };
}

/** A partial correlation below this changes no double any more. */
const SILENT = 1e-17;
