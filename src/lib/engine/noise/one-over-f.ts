import { EngineError } from '../errors';
import { cos, log, pow } from '../elementary';
import { centred } from '../linalg/vector';
import type { TimeBase, Whitener } from './whitener';

/**
 * Spectrum of 1/f noise on the run's own frequencies, k = 1…N−1: S_k ∝ min(k, N−k)^−α, scaled so that its mean over
 * them is 1 (variance 1 once the mean is off). Index 0 is 0: the mean has no finite share in 1/f noise.
 */
export function oneOverFSpectrum(exponent: number, volumes: number): Float64Array {
  const spectrum = Float64Array.from({ length: volumes }, (_, k) =>
    k === 0 ? 0 : pow(Math.min(k, volumes - k), -exponent)
  );
  const sum = spectrum.reduce((total, value) => total + value, 0);
  return volumes > 1 ? spectrum.map((value) => (value * (volumes - 1)) / sum) : spectrum;
}

/**
 * Whitening of 1/f noise, circulant on the run's N frequencies: W = F* S^(−½) F with the mean sent to 0, so that
 * M = Σ_{k≥1} X_k* X_kᵀ/(N S_k). W is a circular filter; only its first row is kept. O(N²) per column.
 *
 * Variant: the run is taken as one period (no correlation is assumed to end at its edges), the usual approximation.
 * The determinant is that of the N − 1 frequencies other than the mean. Even times only.
 * Source: spectrum ∝ f^−α with 0 < α < 1 after Chen & Tyler 2008 (abstract) and He BJ 2011, J Neurosci 31:13786–13795;
 * circulant diagonalisation by Fourier vectors, textbook.
 */
export function oneOverFWhitener(exponent: number, base: TimeBase): Whitener {
  const { volumes } = base;
  if (base.times !== null)
    throw new EngineError('1/f noise', 'uneven volume times', 'even times', 'Use AR(1) noise here.');
  const spectrum = oneOverFSpectrum(exponent, volumes);
  const turns = Float64Array.from({ length: volumes }, (_, i) => cos((2 * Math.PI * i) / volumes));
  const row = Float64Array.from({ length: volumes }, (_, lag) => {
    let sum = 0;
    for (let k = 1; k < volumes; k += 1) sum += turns[(k * lag) % volumes]! / Math.sqrt(spectrum[k]!);
    return sum / volumes;
  });
  let logDeterminant = 0;
  for (let k = 1; k < volumes; k += 1) logDeterminant += log(spectrum[k]!);

  function apply(column: Float64Array): Float64Array {
    // The row sums to 0 only to rounding; with the mean off first a constant goes to 0 itself.
    const middle = centred(column);
    return column.map((_, n) => {
      let sum = 0;
      for (let i = 0; i < volumes; i += 1) sum += row[n >= i ? n - i : n - i + volumes]! * middle[i]!;
      return sum;
    });
  }
  return { apply, logDeterminant };
}
