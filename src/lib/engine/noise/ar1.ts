import { log } from '../elementary';
import type { Seconds } from '../units';
import { rhoAt } from './model';
import type { TimeBase, Whitener } from './whitener';

/**
 * Whitening of AR(1) noise, Vᵢⱼ = ρ^|i−j|: row 0 is y₀, row t is (y_t − ρ y_{t−1})/√(1−ρ²), because V⁻¹ is
 * tridiagonal. O(N) per column. At uneven times ρ follows the distance: ρ_t = ρ^((t_t − t_{t−1})/TR_ρ), which keeps
 * the process Markov and V⁻¹ tridiagonal.
 *
 * ln det V = Σ ln(1 − ρ_t²) = (N−1) ln(1 − ρ²).
 * Source: textbook (Prais–Winsten transformation).
 */
export function ar1Whitener(rho: number, rhoTr: Seconds, base: TimeBase): Whitener {
  const { volumes } = base;
  const rhos = rhosBetween(rho, rhoTr, base);
  const scales = rhos.map((value) => 1 / Math.sqrt(1 - value * value));
  let logDeterminant = 0;
  for (let n = 1; n < volumes; n += 1) logDeterminant += log(1 - rhos[n]! * rhos[n]!);

  function apply(column: Float64Array): Float64Array {
    const out = new Float64Array(volumes);
    out[0] = column[0]!;
    for (let n = 1; n < volumes; n += 1) out[n] = (column[n]! - rhos[n]! * column[n - 1]!) * scales[n]!;
    return out;
  }
  return { apply, logDeterminant };
}

/** ρ between volume n−1 and n, at index n; index 0 is 0. */
export function rhosBetween(rho: number, rhoTr: Seconds, base: TimeBase): Float64Array {
  const { volumes, times, tr } = base;
  const even = rhoAt(rho, rhoTr, tr);
  return Float64Array.from({ length: volumes }, (_, n) => {
    if (n === 0) return 0;
    return times === null ? even : rhoAt(rho, rhoTr, times[n]! - times[n - 1]!);
  });
}
