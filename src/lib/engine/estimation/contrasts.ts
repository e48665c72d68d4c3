import { fisherTail } from '../distribution/fisher';
import { studentCritical, studentTail, studentTwoSided } from '../distribution/student';
import { EngineError, requireFinite } from '../errors';
import { forwardSubstitute, householder } from '../linalg/qr';
import { dot } from '../linalg/vector';
import type { Fit } from './fit';

export interface TTest {
  /** Whether the data can tell; if not, `reason` says why and p is 1. */
  readonly estimable: boolean;
  readonly effect: number;
  readonly standardError: number;
  readonly t: number;
  readonly df: number;
  readonly pTwoSided: number;
  /** P(T > t): small for effects above 0. */
  readonly pOneSided: number;
  /** Half width of the 95 % interval around the effect. */
  readonly margin: number;
  readonly reason: string | null;
}

/**
 * t test of one contrast: effect c·b, standard error √(σ² c (XᵀV⁻¹X)⁻¹ cᵀ).
 *
 * A contrast that the columns cannot tell (or a fit without degrees of freedom) is reported, not thrown: effect 0,
 * t 0, p 1 and a reason. A perfect fit has standard error 0 and t = ±Infinity (or 0 for effect 0).
 * Errors: `EngineError` for a wrong number of weights, or weights that are not finite.
 */
export function testContrast(fit: Fit, weights: readonly number[]): TTest {
  requireWeights(fit, weights);
  const refused = (reason: string): TTest => ({
    estimable: false,
    effect: 0,
    standardError: Infinity,
    t: 0,
    df: Math.max(0, fit.df),
    pTwoSided: 1,
    pOneSided: 1,
    margin: Infinity,
    reason
  });
  if (weights.every((weight) => weight === 0))
    return refused('All weights are 0, so the contrast asks nothing. Give at least one weight other than 0.');
  const blind = unestimable(fit, weights);
  if (blind !== null)
    return refused(
      `Column ${blind + 1} depends on others, so this contrast cannot be estimated. Leave that column out, or ask for a difference.`
    );
  if (fit.df <= 0)
    return refused(
      'There are as many independent columns as volumes: nothing is left to judge by. Use fewer columns or more volumes.'
    );
  const effect = effectOf(fit, weights);
  const spread = forwardSubstitute(
    fit.qr.r,
    fit.qr.kept.map((j) => weights[j]!)
  );
  const standardError = Math.sqrt(fit.variance * spread.reduce((sum, value) => sum + value * value, 0));
  const t = standardError > 0 ? effect / standardError : effect === 0 ? 0 : Math.sign(effect) * Infinity;
  return {
    estimable: true,
    effect,
    standardError,
    t,
    df: fit.df,
    pTwoSided: studentTwoSided(t, fit.df),
    pOneSided: studentTail(t, fit.df),
    margin: studentCritical(0.025, fit.df) * standardError,
    reason: null
  };
}

export interface FTest {
  readonly f: number;
  /** Independent contrasts among the rows. */
  readonly df1: number;
  readonly df2: number;
  readonly p: number;
  readonly reason: string | null;
}

/**
 * F test of several contrasts at once: (Cb)ᵀ (C (XᵀV⁻¹X)⁻¹ Cᵀ)⁻¹ (Cb) / (df1 σ²). Rows that depend on others are left
 * out; rows that cannot be estimated give F 0, p 1 and a reason.
 */
export function testJointly(fit: Fit, rows: readonly (readonly number[])[]): FTest {
  for (const row of rows) requireWeights(fit, row);
  const refused = (reason: string): FTest => ({ f: 0, df1: 0, df2: Math.max(0, fit.df), p: 1, reason });
  for (const row of rows) {
    const blind = unestimable(fit, row);
    if (blind !== null)
      return refused(`Column ${blind + 1} depends on others, so a row cannot be estimated.`);
  }
  if (fit.df <= 0)
    return refused(
      'There are as many independent columns as volumes: nothing is left to judge by. Use fewer columns or more volumes.'
    );
  // With G = R⁻ᵀCᵀ, C (XᵀV⁻¹X)⁻¹ Cᵀ = GᵀG; factoring G = Q S gives (Cb)ᵀ(GᵀG)⁻¹(Cb) = |S⁻ᵀ Cb|².
  const spread = rows.map((row) =>
    Float64Array.from(
      forwardSubstitute(
        fit.qr.r,
        fit.qr.kept.map((j) => row[j]!)
      )
    )
  );
  const factor = householder(spread);
  const df1 = factor.kept.length;
  if (df1 === 0) return refused('All weights are 0, so the rows ask nothing.');
  const effects = factor.kept.map((i) => effectOf(fit, rows[i]!));
  const scores = Float64Array.from(forwardSubstitute(factor.r, effects));
  const between = dot(scores, scores) / df1;
  const f = fit.variance > 0 ? between / fit.variance : between > 0 ? Infinity : 0;
  return { f, df1, df2: fit.df, p: fisherTail(f, df1, fit.df), reason: null };
}

function effectOf(fit: Fit, weights: readonly number[]): number {
  return weights.reduce((sum, weight, j) => sum + weight * fit.coefficients[j]!, 0);
}

/** A dropped column whose weight does not follow from those of the columns it is made of, or null. */
export function unestimable(fit: Fit, weights: readonly number[]): number | null {
  const { kept, dropped, dependence } = fit.qr;
  const size = Math.max(...weights.map(Math.abs));
  for (let d = 0; d < dropped.length; d++) {
    let implied = 0;
    let scale = size;
    dependence[d]!.forEach((share, k) => {
      implied += share * weights[kept[k]!]!;
      scale = Math.max(scale, Math.abs(share * weights[kept[k]!]!));
    });
    if (Math.abs(implied - weights[dropped[d]!]!) > 1e-6 * scale) return dropped[d]!;
  }
  return null;
}

function requireWeights(fit: Fit, weights: readonly number[]): void {
  if (weights.length !== fit.coefficients.length)
    throw new EngineError(
      'number of weights of a contrast',
      weights.length,
      `${fit.coefficients.length}, one per column`,
      'Give every column a weight; 0 leaves it out.'
    );
  for (const weight of weights) requireFinite('weight of a contrast', weight, 'Give every column a number.');
}
