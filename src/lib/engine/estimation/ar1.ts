import { log } from '../elementary';
import { EngineError } from '../errors';
import { backSubstitute } from '../linalg/qr';
import { addScaled } from '../linalg/vector';
import { ar1Whitener } from '../noise/ar1';
import type { Whitener } from '../noise/whitener';
import { fitLeastSquares, requireData, type Fit } from './fit';

export interface Ar1Fit {
  /** Correlation from one volume to the next. */
  readonly rho: number;
  /** GLS at this rho; its variance is that of one volume (marginal), its log-likelihood the ML profile. */
  readonly fit: Fit;
  /** Restricted log-likelihood at this rho, without a term in X alone. */
  readonly restrictedLogLikelihood: number;
}

/** GLS with AR(1) noise of known rho, Vᵢⱼ = ρ^|i−j|, at even volumes. Domain: |rho| < 1. Errors: `EngineError`. */
export function fitAr1(columns: readonly Float64Array[], y: Float64Array, rho: number): Ar1Fit {
  requireData(columns, y);
  const fit = fitLeastSquares(columns, y, whitenerAt(rho, y.length));
  return { rho, fit, restrictedLogLikelihood: restricted(fit, rho, y.length) };
}

/**
 * GLS with AR(1) noise whose rho is found from the data, by maximum likelihood ('ML') or restricted maximum likelihood
 * ('REML', which does not blame the columns' flexibility on the noise; better with many columns).
 *
 * ML: −n/2 ln(2π q/n) − (n−1)/2 ln(1−ρ²) − n/2; REML: −(n−p)/2 ln(2π q/(n−p)) − (n−1)/2 ln(1−ρ²) − ½ ln|XᵀV⁻¹X| −
 * (n−p)/2, with q = eᵀV⁻¹e at the GLS fit. The best of 41 values of rho is bracketed, then the derivative's root is
 * found by bisection: exact to rounding.
 *
 * Domain: at least two volumes more than independent columns. Errors: `EngineError` otherwise, and for malformed data.
 * Source: Harville DA (1977) J Am Stat Assoc 72:320–338 (from memory); checked against statsmodels, R and mpmath.
 */
export function estimateAr1(
  columns: readonly Float64Array[],
  y: Float64Array,
  method: 'ML' | 'REML'
): Ar1Fit {
  requireData(columns, y);
  const start = fitAr1(columns, y, 0);
  if (start.fit.df < 2)
    throw new EngineError(
      'volumes left for the noise',
      start.fit.df,
      'at least 2',
      'Use fewer columns or a longer run.'
    );
  // A perfect fit leaves no noise to have a correlation.
  if (start.fit.squares <= 1e-24 * (y.reduce((sum, value) => sum + value * value, 0) || 1)) return start;
  const valueAt = (rho: number) => {
    const at = fitAr1(columns, y, rho);
    return method === 'ML' ? at.fit.logLikelihood : at.restrictedLogLikelihood;
  };
  let best = 0;
  let bestValue = -Infinity;
  const grid = Array.from({ length: 41 }, (_, i) => (i - 20) / 20.2);
  grid.forEach((rho, i) => {
    const value = valueAt(rho);
    if (value > bestValue) {
      bestValue = value;
      best = i;
    }
  });
  let low = best > 0 ? grid[best - 1]! : -0.999999;
  let high = best < grid.length - 1 ? grid[best + 1]! : 0.999999;
  for (let i = 0; i < 60; i++) {
    const middle = (low + high) / 2;
    if (middle <= low || middle >= high) break;
    if (slopeAt(columns, y, middle, method) > 0) low = middle;
    else high = middle;
  }
  return fitAr1(columns, y, (low + high) / 2);
}

function whitenerAt(rho: number, volumes: number): Whitener {
  // At its own TR rho is taken as it is; the TR's value does not matter.
  return ar1Whitener(rho, 1, { tr: 1, volumes, times: null });
}

function restricted(fit: Fit, rho: number, n: number): number {
  const left = n - fit.rank;
  if (left <= 0) return -Infinity;
  let logDeterminant = 0;
  fit.qr.r.forEach((column, j) => (logDeterminant += 2 * log(Math.abs(column[j]!))));
  return (
    -0.5 * left * (log((2 * Math.PI * fit.squares) / left) + 1) -
    0.5 * (n - 1) * log(1 - rho * rho) -
    0.5 * logDeterminant
  );
}

/** Derivative of the profile by rho. At the GLS fit q changes with V alone (its derivative by b is 0). */
function slopeAt(
  columns: readonly Float64Array[],
  y: Float64Array,
  rho: number,
  method: 'ML' | 'REML'
): number {
  const { fit } = fitAr1(columns, y, rho);
  const n = y.length;
  const ownTerm = ((n - 1) * rho) / (1 - rho * rho);
  const ratio = slopeOfForm(fit.residuals, rho) / fit.squares;
  if (method === 'ML') return -0.5 * n * ratio + ownTerm;
  // ½ d ln|XᵀV⁻¹X| = ½ Σ uᵀ dV⁻¹ u over the columns u of X R⁻¹ (orthonormal once whitened).
  let spread = 0;
  for (let k = 0; k < fit.rank; k++) {
    const unit = new Array<number>(fit.rank).fill(0);
    unit[k] = 1;
    const u = new Float64Array(n);
    backSubstitute(fit.qr.r, unit).forEach((weight, j) => addScaled(u, columns[fit.qr.kept[j]!]!, weight));
    spread += slopeOfForm(u, rho);
  }
  return -0.5 * (n - fit.rank) * ratio + ownTerm - 0.5 * spread;
}

/** d/dρ of uᵀV⁻¹u = (S₀ + ρ² S₁ − 2ρ S₂)/(1 − ρ²): squares of all, of all but the ends, products of neighbours. */
function slopeOfForm(u: Float64Array, rho: number): number {
  let all = 0;
  let inner = 0;
  let neighbours = 0;
  for (let t = 0; t < u.length; t++) {
    all += u[t]! * u[t]!;
    if (t > 0 && t < u.length - 1) inner += u[t]! * u[t]!;
    if (t > 0) neighbours += u[t]! * u[t - 1]!;
  }
  const rest = 1 - rho * rho;
  const form = all + rho * rho * inner - 2 * rho * neighbours;
  return ((2 * rho * inner - 2 * neighbours) * rest + 2 * rho * form) / (rest * rest);
}
