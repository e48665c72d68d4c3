import { cos } from '../elementary';
import type { Seconds } from '../units';
import { requireNoise, rhoAt, type NoiseModel } from './model';
import { oneOverFSpectrum } from './one-over-f';

/**
 * The autocorrelation r₀ = 1, r₁ … r_{N−1} of a noise model at even volumes: V is its Toeplitz matrix. 1/f noise is
 * circular: r_{N−k} = r_k, of variance 1 after the mean is off (so r₀ is (N−1)/N).
 */
export function autocorrelationOf(noise: NoiseModel, tr: Seconds, volumes: number): Float64Array {
  const model = requireNoise(noise);
  const out = new Float64Array(volumes);
  out[0] = 1;
  switch (model.kind) {
    case 'white':
      break;
    case 'ar1':
    case 'ar1-white': {
      const rho = rhoAt(model.rho, model.rhoTr, tr);
      let power = model.kind === 'ar1' ? 1 : model.share;
      for (let k = 1; k < volumes; k += 1) out[k] = power *= rho;
      break;
    }
    case 'given':
      model.correlations.slice(0, volumes - 1).forEach((value, k) => (out[k + 1] = value));
      break;
    case 'one-over-f': {
      const spectrum = oneOverFSpectrum(model.exponent, volumes);
      for (let k = 0; k < volumes; k += 1) {
        let sum = 0;
        for (let j = 1; j < volumes; j += 1)
          sum += spectrum[j]! * cos((2 * Math.PI * ((j * k) % volumes)) / volumes);
        out[k] = sum / volumes;
      }
    }
  }
  return out;
}

/** V·column with V the Toeplitz matrix of r; no matrix is formed. */
export function correlate(r: Float64Array, column: Float64Array): Float64Array {
  return column.map((_, n) => {
    let sum = 0;
    for (let i = 0; i < column.length; i += 1) sum += r[Math.abs(n - i)]! * column[i]!;
    return sum;
  });
}
