import { exp, expm1 } from '../elementary';
import { requireFinite, requirePositive } from '../errors';
import { normalDensity, normalTail } from './normal';

/**
 * Sums over s = √(χ²_df/df), the scale in T = (Z + δ)/s: with s = e^y its density is proportional to
 * exp(df (y − (e^{2y} − 1)/2)), smooth and falling fast to both sides, so that the trapezoid rule converges
 * exponentially; dividing by the same rule's sum of the density leaves no constant to compute.
 */
function average(df: number, delta: number, part: (s: number) => number): number {
  // A third of the narrowest feature (the density, the integrand, and at few df the strip where both are analytic).
  const step = Math.min(0.36, 1 / Math.sqrt(2 * df), 1 / (1 + Math.abs(delta))) / 3;
  const weight = (y: number) => exp(df * (y - expm1(2 * y) / 2));
  const above = sumAround(step, (y) => weight(y) * part(exp(y)));
  const below = sumAround(step, weight);
  return above / below;
}

/** Σ f(k · step) over whole k, from the largest term outwards until terms no longer count. Unimodal f ≥ 0. */
function sumAround(step: number, f: (y: number) => number): number {
  let peak = 0;
  let value = f(0);
  // In a far tail everything near 0 is 0: look to the left, where s is small and the tail heavy.
  while (value === 0 && peak * step > -60) {
    peak -= Math.max(1, Math.round(0.25 / step));
    value = f(peak * step);
  }
  // Below the smallest double everywhere.
  if (value === 0) return 0;
  for (const direction of [-1, 1]) {
    for (;;) {
      const next = f((peak + direction) * step);
      if (!(next > value)) break;
      value = next;
      peak += direction;
    }
  }
  let sum = value;
  for (const direction of [-1, 1])
    for (let k = peak + direction; ; k += direction) {
      const term = f(k * step);
      sum += term;
      // A step changes the exponent little: the terms left together are far below the last digit.
      if (term < 1e-20 * value) break;
    }
  return sum;
}

/**
 * Upper tail P(T > t) of the non-central t with df > 0 degrees of freedom and non-centrality δ:
 * T = (Z + δ)/√(χ²_df/df).
 *
 * P = E[Φ(δ − t s)] over s. Absolute error below 1e-12 in the tabulated range (df 1 … 1,000, |δ| ≤ 10), small
 * relative error also in the tails. Errors: `EngineError` for values that are not finite, df ≤ 0.
 * Source: the definition; the trapezoid rule on analytic integrands: Trefethen LN, Weideman JAC (2014) SIAM Rev
 * 56:385–458 (from memory). Checked against the reference set (mpmath, R).
 * @example noncentralTail(1.710882079909428, 24, 3) // 0.897763944256
 */
export function noncentralTail(t: number, df: number, delta: number): number {
  requireFinite('t', t, 'Give a finite number.');
  requireFinite('non-centrality', delta, 'Use effect · √efficiency / noise SD.');
  requirePositive('degrees of freedom', df, 'Give more volumes or participants than columns.');
  return Math.min(
    1,
    average(df, delta, (s) => normalTail(t * s - delta))
  );
}

/**
 * Density of the non-central t: E[s φ(t s − δ)] over s = √(χ²_df/df). As {@link noncentralTail}.
 * @example noncentralDensity(0, 5, 0) // 0.3796066898224944
 */
export function noncentralDensity(t: number, df: number, delta: number): number {
  requireFinite('t', t, 'Give a finite number.');
  requireFinite('non-centrality', delta, 'Use effect · √efficiency / noise SD.');
  requirePositive('degrees of freedom', df, 'Give more volumes or participants than columns.');
  return average(df, delta, (s) => s * normalDensity(t * s - delta));
}
