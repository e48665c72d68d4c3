import { log } from '../elementary';
import type { Seconds } from '../units';
import { rhosBetween } from './ar1';
import type { TimeBase, Whitener } from './whitener';

/**
 * Whitening of AR(1) plus white noise, V = λ·AR(1) + (1 − λ)·I (correlation λρ^k at lag k > 0, an ARMA(1,1)):
 * a scalar Kalman filter runs down the column and returns innovations over their standard deviation. O(N), and exactly
 * the inverse of V's Cholesky factor; uneven times are no harder than even ones.
 *
 * @param share λ, the share of AR(1) variance, 0…1
 * Source: Kalman filter of a first-order autoregression seen through white noise; textbook.
 */
export function ar1WhiteWhitener(rho: number, rhoTr: Seconds, share: number, base: TimeBase): Whitener {
  const { volumes } = base;
  const rhos = rhosBetween(rho, rhoTr, base);
  const gains = new Float64Array(volumes);
  const scales = new Float64Array(volumes);
  let logDeterminant = 0;
  let variance = share;
  for (let n = 0; n < volumes; n += 1) {
    const kept = rhos[n]! * rhos[n]!;
    if (n > 0) variance = kept * variance + share * (1 - kept);
    const total = variance + (1 - share);
    gains[n] = variance / total;
    scales[n] = 1 / Math.sqrt(total);
    logDeterminant += log(total);
    variance *= 1 - gains[n]!;
  }

  function apply(column: Float64Array): Float64Array {
    const out = new Float64Array(volumes);
    let state = 0;
    for (let n = 0; n < volumes; n += 1) {
      state *= rhos[n]!;
      const innovation = column[n]! - state;
      out[n] = innovation * scales[n]!;
      state += gains[n]! * innovation;
    }
    return out;
  }
  return { apply, logDeterminant };
}
