import { exp, log } from '../elementary';
import { requirePositive } from '../errors';
import type { Seconds } from '../units';
import { logGamma } from './gamma';
import { gammaMixture, type GammaMixture, type GammaTerm } from './gamma-mixture';

/** Parameters of Glover's difference of two gamma variates; t₁ and t₂ in seconds. */
export interface GloverParameters {
  n1: number;
  t1: Seconds;
  n2: number;
  t2: Seconds;
  a2: number;
}

export const GLOVER_AUDITORY: Readonly<GloverParameters> = { n1: 6, t1: 0.9, n2: 12, t2: 0.9, a2: 0.35 };
/** From memory in the reference values. */
export const GLOVER_MOTOR: Readonly<GloverParameters> = { n1: 5, t1: 1.1, n2: 12, t2: 0.9, a2: 0.4 };

/**
 * h(t) = (t/(n₁t₁))^n₁ e^(n₁ − t/t₁) − a₂ (t/(n₂t₂))^n₂ e^(n₂ − t/t₂): each term has maximum 1 and a₂.
 *
 * Source: Glover GH (1999) Deconvolution of impulse response in event-related BOLD fMRI. NeuroImage 9:416–429.
 * @example glover(GLOVER_AUDITORY).peak.time // 5.239982459855056
 */
export function glover(parameters: GloverParameters = GLOVER_AUDITORY, length: Seconds = 32): GammaMixture {
  const { n1, t1, n2, t2, a2 } = parameters;
  const terms = [unitVariate(n1, t1, 1), unitVariate(n2, t2, -a2)];
  return gammaMixture('Difference of gamma variates (Glover 1999)', terms, length);
}

/** (t/(n b))^n e^(n − t/b) as a weighted gamma density of shape n + 1. */
function unitVariate(n: number, scale: Seconds, height: number): GammaTerm {
  requirePositive('exponent of a gamma variate', n, 'Use the published value.');
  requirePositive('scale of a gamma variate', scale, 'Give it in seconds.');
  // b^(n+1) Γ(n+1) t^n e^(−t/b)-density → divide by its maximum (n b/e)^n.
  const weight = height * scale * exp(logGamma(n + 1) + n - n * log(n));
  return { weight, shape: n + 1, scale };
}

/**
 * h(t) = ((t−δ)/τ)^(n−1) e^(−(t−δ)/τ) / (τ (n−1)!), a gamma density after a pure delay. Area 1.
 *
 * Source: Boynton GM, Engel SA, Glover GH, Heeger DJ (1996) Linear systems analysis of fMRI in human V1. J Neurosci
 * 16:4207–4221, equation 3, with n = 3, τ = 1.08 s, δ = 2.05 s.
 * @example boynton().peak // { time: 4.21, value: 0.2506208948826161 }
 */
export function boynton(
  tau: Seconds = 1.08,
  delay: Seconds = 2.05,
  n = 3,
  length: Seconds = 32
): GammaMixture {
  const name = 'Gamma density after a delay (Boynton et al. 1996)';
  return gammaMixture(name, [{ weight: 1, shape: n, scale: tau }], length, delay);
}

/**
 * h(t) = t^8.6 e^(−t/0.547), unscaled (peak about 1e4 at 4.7042 s): scale by `peakScale` before use.
 *
 * Source: the gamma variate of Cohen MS (1997) Parametric analysis of fMRI data using linear systems methods.
 * NeuroImage 6:93–103 (article from memory, formula from a citing text).
 */
export function gammaVariate(power = 8.6, scale: Seconds = 0.547, length: Seconds = 32): GammaMixture {
  requirePositive('power of the gamma variate', power, 'Use the published 8.6.');
  requirePositive('scale of the gamma variate', scale, 'Use the published 0.547 s.');
  const weight = exp(logGamma(power + 1) + (power + 1) * log(scale));
  return gammaMixture('Gamma variate (Cohen 1997)', [{ weight, shape: power + 1, scale }], length);
}
