import { EngineError, requireBetween, requireFinite, requirePositive } from '../errors';
import { pow } from '../elementary';
import type { Seconds } from '../units';

/**
 * The serial correlation of the noise, always as a correlation matrix V (unit diagonal).
 *
 * - `white`: V = I.
 * - `ar1`: Vᵢⱼ = ρ^|i−j|, ρ at the stated TR.
 * - `ar1-white`: V = share · AR(1) + (1 − share) · I, an ARMA(1,1) correlation.
 * - `one-over-f`: spectrum ∝ f^−exponent, circulant on the run's own frequencies, mean removed.
 * - `given`: correlation at lags 1, 2, … volumes; 0 beyond the list.
 */
export type NoiseModel =
  | { kind: 'white' }
  | { kind: 'ar1'; rho: number; rhoTr: Seconds }
  | { kind: 'ar1-white'; rho: number; rhoTr: Seconds; share: number }
  | { kind: 'one-over-f'; exponent: number }
  | { kind: 'given'; correlations: readonly number[] };

/** The product's default: 0.3 from one volume to the next at a TR of 2 s. */
export const DEFAULT_NOISE: NoiseModel = { kind: 'ar1', rho: 0.3, rhoTr: 2 };

/**
 * ρ carried from the TR it belongs to over to another: ρ(TR₂) = ρ(TR₁)^(TR₂/TR₁), as an exponential decay in time.
 *
 * Domain: |ρ| < 1, TRs > 0; a negative ρ alternates from volume to volume and has no meaning at another TR.
 * Source: the AR(1) process sampled in continuous time; textbook. Errors: `EngineError` outside the domain.
 * @example rhoAt(0.3, 2, 1) // 0.5477225575051661
 */
export function rhoAt(rho: number, rhoTr: Seconds, tr: Seconds): number {
  requireRho(rho);
  requirePositive('TR that rho belongs to', rhoTr, 'Say at which TR rho was measured, in seconds.');
  requirePositive('repetition time', tr, 'Give the TR in seconds.');
  if (tr === rhoTr || rho === 0) return rho;
  if (rho < 0)
    throw new EngineError(
      'rho',
      rho,
      `a number not below 0 at a TR other than its own (${rhoTr} s)`,
      WAY_OUT
    );
  return pow(rho, tr / rhoTr);
}

const WAY_OUT = 'Use the correlation from one volume to the next, for instance 0.3 at a TR of 2 s.';

function requireRho(rho: number): void {
  requireFinite('rho', rho, WAY_OUT);
  if (Math.abs(rho) >= 1)
    throw new EngineError('rho', rho, 'a number between −1 and 1, both excluded', WAY_OUT);
}

/** Throws `EngineError` unless the model's numbers are in their domain; returns the model. */
export function requireNoise(noise: NoiseModel): NoiseModel {
  switch (noise.kind) {
    case 'white':
      return noise;
    case 'ar1-white':
      requireBetween('share of AR(1) noise', noise.share, 0, 1, 'Use 1 for all AR(1), 0 for all white.');
      requireRho(noise.rho);
      requirePositive('TR that rho belongs to', noise.rhoTr, 'Say at which TR rho was measured, in seconds.');
      return noise;
    case 'ar1':
      requireRho(noise.rho);
      requirePositive('TR that rho belongs to', noise.rhoTr, 'Say at which TR rho was measured, in seconds.');
      return noise;
    case 'one-over-f':
      requireBetween(
        'exponent of 1/f noise',
        noise.exponent,
        0,
        2,
        'Published values lie between 0.5 and 1.'
      );
      return noise;
    case 'given':
      for (const value of noise.correlations)
        if (!(Math.abs(value) < 1))
          throw new EngineError(
            'given autocorrelation',
            value,
            'numbers between −1 and 1',
            'List lags 1, 2, ….'
          );
      return noise;
    default:
      throw new EngineError(
        'noise model',
        (noise as { kind: unknown }).kind,
        'white, ar1, ar1-white, one-over-f or given',
        'Choose one of them.'
      );
  }
}
