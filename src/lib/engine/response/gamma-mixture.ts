import { cos, pow, sin } from '../elementary';
import { EngineError, requireFinite, requireNotNegative } from '../errors';
import type { Hertz, Seconds } from '../units';
import { gammaDensity } from './gamma';
import { maximise } from './peak';
import type { Complex, Response } from './response';

/** One weighted gamma density: weight · g(t; shape, scale). */
export interface GammaTerm {
  weight: number;
  shape: number;
  /** Seconds. */
  scale: Seconds;
}

/** A gamma mixture always has its slope. */
export type GammaMixture = Response & Required<Pick<Response, 'slope'>>;

/**
 * h(t) = Σᵢ wᵢ g(t − delay; aᵢ, bᵢ) on 0 ≤ t ≤ length, the common form of nearly all published response shapes:
 * value, slope and integral in closed form (the integral by the regularised incomplete gamma function).
 *
 * `length` may be Infinity (untruncated). Errors: `EngineError` for a non-finite weight, shape below 1, scale ≤ 0,
 * negative delay, or a length that ends before the delay.
 * @example gammaMixture('one', [{ weight: 1, shape: 6, scale: 1 }], 32).peak.time // 5
 */
export function gammaMixture(
  name: string,
  terms: readonly GammaTerm[],
  length: Seconds,
  delay: Seconds = 0
): GammaMixture {
  requireNotNegative('response delay', delay, 'Give the delay in seconds, 0 or more.');
  if (!(length > delay))
    throw new EngineError(
      'response length',
      length,
      `a length above the delay of ${delay} s`,
      'Make it longer.'
    );
  if (terms.length === 0)
    throw new EngineError('list of gamma terms', terms, 'at least one term', 'Give one term or more.');
  const parts = terms.map((term) => ({
    weight: requireFinite('weight of a gamma term', term.weight, 'Give a number.'),
    gamma: gammaDensity(term.shape, term.scale)
  }));

  function sum(t: Seconds, what: 'density' | 'slope' | 'cumulative'): number {
    let total = 0;
    for (const part of parts) total += part.weight * part.gamma[what](t - delay);
    return total;
  }
  const value = (t: Seconds) => (t < 0 || t > length ? 0 : sum(t, 'density'));
  const slope = (t: Seconds) => (t < 0 || t > length ? 0 : sum(t, 'slope'));
  const integral = (t: Seconds) => (t <= 0 ? 0 : sum(Math.min(t, length), 'cumulative'));
  const peak = maximise(value, slope, 0, Math.min(length, delay + reach(terms)));
  const shape = { name, length, value, slope, integral, peak };
  return length === Infinity ? { ...shape, transfer: (f) => gammaTransfer(terms, delay, f) } : shape;
}

/** A time after which every term has nothing left: mean plus twelve standard deviations of the widest. */
function reach(terms: readonly GammaTerm[]): Seconds {
  return Math.max(...terms.map(({ shape, scale }) => scale * (shape + 12 * Math.sqrt(shape))));
}

/** Σ wᵢ e^(−2πif·delay) / (1 + 2πif bᵢ)^aᵢ: the Fourier transform of an untruncated mixture. */
function gammaTransfer(terms: readonly GammaTerm[], delay: Seconds, f: Hertz): Complex {
  const omega = 2 * Math.PI * f;
  let [re, im] = [0, 0];
  for (const { weight, shape, scale } of terms) {
    const y = omega * scale;
    const size = weight * pow(1 + y * y, -shape / 2);
    // The angle only ever draws a spectrum, so the language's own arctangent will do.
    const angle = -shape * Math.atan(y) - omega * delay;
    re += size * cos(angle);
    im += size * sin(angle);
  }
  return { re, im };
}
