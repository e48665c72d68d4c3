import { exp, log } from '../elementary';
import { EngineError, requireFinite, requirePositive } from '../errors';
import { logGamma } from '../response/gamma';
import { regularisedBeta } from './beta';

const WAY_OUT = 'Give more volumes or participants than columns.';

/**
 * Upper tail P(T > t) of Student's t with df > 0 (whole or not).
 * P = ½ I_{df/(df+t²)}(df/2, ½). Source: textbook.
 * @example studentTail(2.2281388519862744, 10) // 0.025
 */
export function studentTail(t: number, df: number): number {
  requirePositive('degrees of freedom', df, WAY_OUT);
  if (Number.isNaN(t))
    throw new EngineError('t', t, 'a number', 'Check the fit: a standard error of 0 gives no t.');
  if (t === Infinity || t === -Infinity) return t > 0 ? 0 : 1;
  const square = t * t;
  const half = 0.5 * regularisedBeta(df / 2, 0.5, df / (df + square), square / (df + square));
  return t >= 0 ? half : 1 - half;
}

/** Two-sided p value of t. */
export function studentTwoSided(t: number, df: number): number {
  return Math.min(1, 2 * studentTail(Math.abs(t), df));
}

/** Density of Student's t. */
export function studentDensity(t: number, df: number): number {
  requirePositive('degrees of freedom', df, WAY_OUT);
  requireFinite('t', t, 'Give a finite number.');
  const constant = logGamma((df + 1) / 2) - logGamma(df / 2) - 0.5 * log(df * Math.PI);
  return exp(constant - ((df + 1) / 2) * log(1 + (t * t) / df));
}

/**
 * The value that Student's t exceeds with probability `alpha`, 0 < alpha < 1.
 *
 * Newton's steps on ln P(T > t), kept within a bracket: residual probability below 1e-13 of alpha.
 * @example studentCritical(0.05, 24) // 1.710882079909
 */
export function studentCritical(alpha: number, df: number): number {
  if (!(alpha > 0 && alpha < 1))
    throw new EngineError('alpha', alpha, 'a number between 0 and 1, both excluded', 'Use 0.05 or 0.001.');
  requirePositive('degrees of freedom', df, WAY_OUT);
  if (alpha === 0.5) return 0;
  if (alpha > 0.5) return -studentCritical(1 - alpha, df);
  let low = 0;
  let high = 1;
  while (studentTail(high, df) > alpha) {
    low = high;
    high *= 2;
  }
  let t = (low + high) / 2;
  for (let i = 0; i < 200; i++) {
    const tail = studentTail(t, df);
    if (tail > alpha) low = t;
    else high = t;
    const next = t + ((log(tail) - log(alpha)) * tail) / studentDensity(t, df);
    const moved = next > low && next < high ? next : (low + high) / 2;
    if (Math.abs(moved - t) <= 2e-16 * Math.abs(t)) return moved;
    t = moved;
  }
  return t;
}
