import type { Seconds } from '../units';
import { ar1Whitener } from './ar1';
import { ar1WhiteWhitener } from './ar1-white';
import { givenWhitener } from './given';
import { requireNoise, type NoiseModel } from './model';
import { oneOverFWhitener } from './one-over-f';

/**
 * W with W V Wᵀ = I (or = the projection that removes the mean, for noise without one), as an action on a column:
 * no N×N matrix is formed.
 */
export interface Whitener {
  /** W·column; a new array of the same length. */
  apply(column: Float64Array): Float64Array;
  /** ln det V, for likelihoods; NaN never occurs, 0 for white noise. */
  readonly logDeterminant: number;
}

/** When the volumes are: evenly every `tr`, or at `times` of their own (then `tr` is their mean distance). */
export interface TimeBase {
  tr: Seconds;
  volumes: number;
  times: ArrayLike<Seconds> | null;
}

/**
 * The whitening of a noise model for one run.
 * Errors: `EngineError` for numbers outside the model's domain or a model that cannot take uneven times.
 */
export function whitenerOf(noise: NoiseModel, base: TimeBase): Whitener {
  requireNoise(noise);
  switch (noise.kind) {
    case 'white':
      return { apply: (column) => column.slice(), logDeterminant: 0 };
    case 'ar1':
      return ar1Whitener(noise.rho, noise.rhoTr, base);
    case 'ar1-white':
      return ar1WhiteWhitener(noise.rho, noise.rhoTr, noise.share, base);
    case 'one-over-f':
      return oneOverFWhitener(noise.exponent, base);
    case 'given':
      return givenWhitener(noise.correlations, base);
  }
}
