import { requirePositive } from '../errors';
import type { Seconds } from '../units';
import { gammaMixture, type GammaMixture, type GammaTerm } from './gamma-mixture';

/** The seven published parameters. Seconds, except the ratio. */
export interface DoubleGammaParameters {
  /** Delay of the response: shape × scale of the first density. */
  delay: Seconds;
  /** Delay of the undershoot. */
  undershoot: Seconds;
  /** Dispersion (scale) of the response. */
  dispersion: Seconds;
  /** Dispersion (scale) of the undershoot. */
  undershootDispersion: Seconds;
  /** Response to undershoot. */
  ratio: number;
  /** Time from the event to the start of the response. */
  onset: Seconds;
  /** End of the support; Infinity for the untruncated formula. */
  length: Seconds;
}

export const DOUBLE_GAMMA: Readonly<DoubleGammaParameters> = {
  delay: 6,
  undershoot: 16,
  dispersion: 1,
  undershootDispersion: 1,
  ratio: 6,
  onset: 0,
  length: 32
};

/** The two densities of a parameter set, before any onset: shared with the derivatives. */
export function doubleGammaTerms(all: DoubleGammaParameters): GammaTerm[] {
  const wayOut = 'Use the published 6, 16, 1, 1, 6 or numbers above 0.';
  requirePositive('response delay', all.delay, wayOut);
  requirePositive('undershoot delay', all.undershoot, wayOut);
  requirePositive('response dispersion', all.dispersion, wayOut);
  requirePositive('undershoot dispersion', all.undershootDispersion, wayOut);
  requirePositive('ratio of response to undershoot', all.ratio, wayOut);
  return [
    { weight: 1, shape: all.delay / all.dispersion, scale: all.dispersion },
    {
      weight: -1 / all.ratio,
      shape: all.undershoot / all.undershootDispersion,
      scale: all.undershootDispersion
    }
  ];
}

/**
 * The double gamma of Friston et al. 1998:
 * h(t) = g(t; 6, 1) − g(t; 16, 1)/6 with g(t; a, b) the gamma density of shape a and scale b, support 0…32 s with
 * both ends, 0 outside. Unscaled: peak 0.17544 at 4.9985 s, integral 0…∞ 5/6.
 *
 * Variant: the published seven-parameter form; shapes are delay/dispersion. Times in seconds.
 * Errors: `EngineError` for parameters not above 0 or shapes below 1.
 * Source: Friston KJ, Josephs O, Rees G, Turner R (1998) Nonlinear event-related responses in fMRI. Magn Reson Med
 * 39:41–52.
 * @example doubleGamma().value(5) // 0.17544116219546391
 */
export function doubleGamma(parameters: Partial<DoubleGammaParameters> = {}): GammaMixture {
  const all = { ...DOUBLE_GAMMA, ...parameters };
  return gammaMixture('Double gamma (Friston et al. 1998)', doubleGammaTerms(all), all.length, all.onset);
}
