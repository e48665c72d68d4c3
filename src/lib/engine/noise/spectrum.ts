import { cos } from '../elementary';
import { EngineError } from '../errors';
import type { Hertz, Seconds } from '../units';
import { requireNoise, rhoAt, type NoiseModel } from './model';
import { oneOverFSpectrum } from './one-over-f';

/**
 * Two-sided spectrum of AR(1) noise of variance 1, per unit of f·TR: (1−ρ²)/(1 − 2ρ cos 2πf·TR + ρ²). Its integral
 * over one period of f·TR is 1.
 * @param cycles f·TR, cycles per volume
 * @example ar1Density(0.3, 0) // 1.3 / 0.7
 */
export function ar1Density(rho: number, cycles: number): number {
  return (1 - rho * rho) / (1 - 2 * rho * cos(2 * Math.PI * cycles) + rho * rho);
}

/**
 * The spectrum of a noise model at frequency `f`, two-sided, variance 1, relative to white noise (1 everywhere).
 * 1/f noise is read at the nearest frequency of the run (never below its first).
 * @param f Hz, 0 … 1/(2·TR)
 */
export function noiseDensity(noise: NoiseModel, f: Hertz, tr: Seconds, volumes: number): number {
  const model = requireNoise(noise);
  const cycles = f * tr;
  switch (model.kind) {
    case 'white':
      return 1;
    case 'ar1':
      return ar1Density(rhoAt(model.rho, model.rhoTr, tr), cycles);
    case 'ar1-white':
      return model.share * ar1Density(rhoAt(model.rho, model.rhoTr, tr), cycles) + 1 - model.share;
    case 'given':
      return model.correlations.reduce((sum, r, k) => sum + 2 * r * cos(2 * Math.PI * cycles * (k + 1)), 1);
    case 'one-over-f': {
      if (volumes < 2)
        throw new EngineError(
          'number of volumes',
          volumes,
          'at least 2',
          '1/f noise needs a run to live in.'
        );
      const index = Math.min(Math.max(1, Math.round(cycles * volumes)), Math.floor(volumes / 2));
      return oneOverFSpectrum(model.exponent, volumes)[index]!;
    }
  }
}
