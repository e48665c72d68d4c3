import { studentCritical } from '../distribution/student';
import { noncentralTail } from '../distribution/noncentral-t';
import { EngineError, requireFinite, requireNotNegative, requirePositive } from '../errors';

/** How a t test is decided. */
export interface TestRule {
  /** Level of the test, 0 < alpha < 1. */
  readonly alpha: number;
  /** 1: only effects above 0 count; 2: both directions. */
  readonly sides: 1 | 2;
}

export interface Power {
  /** Non-centrality δ: the effect in standard errors. */
  readonly delta: number;
  readonly df: number;
  /** |t| must exceed this. */
  readonly critical: number;
  /** Probability that the test finds the effect. */
  readonly power: number;
}

/**
 * Power of a t test with non-centrality δ: one-sided P(T > t_{1−α}), two-sided P(T > c) + P(T < −c), c = t_{1−α/2}.
 * Errors: `EngineError` for df ≤ 0, alpha outside (0, 1).
 * @example powerOfT(3, 24, { alpha: 0.05, sides: 1 }).power // 0.897763944256
 */
export function powerOfT(delta: number, df: number, { alpha, sides }: TestRule): Power {
  if (sides !== 1 && sides !== 2)
    throw new EngineError('number of sides', sides, '1 or 2', 'Use 2 when the sign of the effect is open.');
  const critical = studentCritical(alpha / sides, df);
  const above = noncentralTail(critical, df, delta);
  // P(T < −c; δ) = P(T > c; −δ).
  const below = sides === 2 ? noncentralTail(critical, df, -delta) : 0;
  return { delta, df, critical, power: Math.min(1, above + below) };
}

export interface RunSet {
  /** Height of the response to one isolated trial, percent signal change. */
  readonly effect: number;
  /** 1/(c M⁺ cᵀ) of the contrast, all runs together, columns scaled to a single-trial peak of 1. */
  readonly efficiency: number;
  /** Standard deviation of the noise per volume, percent, at the TR of the design. */
  readonly noiseSd: number;
  /** Volumes minus the rank of all columns, over all runs. */
  readonly df: number;
}

/**
 * Power to find an effect in one participant's runs: δ = effect · √efficiency / noise SD.
 *
 * A contrast that cannot be estimated (efficiency 0) has δ = 0 and the power of a test on nothing, alpha.
 * Source: general linear model with known noise correlation, textbook.
 * @example runPower({ effect: 0.3, efficiency: 20.408933542284228, noiseSd: 1, df: 192 }, { alpha: 0.05, sides: 1 }).power // 0.384248
 */
export function runPower({ effect, efficiency, noiseSd, df }: RunSet, rule: TestRule): Power {
  requireFinite('effect', effect, 'Give the effect in percent signal change.');
  requireNotNegative('efficiency', efficiency, 'Take it from the design numbers.');
  requirePositive('noise', noiseSd, 'Give the noise in percent per volume, e.g. 1.');
  return powerOfT((effect * Math.sqrt(efficiency)) / noiseSd, df, rule);
}

/** Variance of one participant's contrast estimate: noise variance / efficiency; Infinity at efficiency 0. */
export function withinVariance(noiseSd: number, efficiency: number): number {
  requirePositive('noise', noiseSd, 'Give the noise in percent per volume, e.g. 1.');
  requireNotNegative('efficiency', efficiency, 'Take it from the design numbers.');
  return (noiseSd * noiseSd) / efficiency;
}
