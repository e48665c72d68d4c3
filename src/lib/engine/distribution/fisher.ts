import { EngineError, requirePositive } from '../errors';
import { regularisedBeta } from './beta';

/**
 * Upper tail P(F > f) of Fisher's F with df1 and df2 degrees of freedom: I_{df2/(df2 + df1 f)}(df2/2, df1/2).
 * @example fisherTail(4.102821015303817, 2, 10) // 0.05
 */
export function fisherTail(f: number, df1: number, df2: number): number {
  requirePositive('numerator degrees of freedom', df1, 'Test at least one independent contrast.');
  requirePositive('denominator degrees of freedom', df2, 'Give more volumes than columns.');
  if (Number.isNaN(f)) throw new EngineError('F', f, 'a number not below 0', 'Check the fit.');
  if (f <= 0) return 1;
  if (f === Infinity) return 0;
  const total = df2 + df1 * f;
  return regularisedBeta(df2 / 2, df1 / 2, df2 / total, (df1 * f) / total);
}
