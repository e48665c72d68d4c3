import { cos } from '../elementary';
import { EngineError } from '../errors';
import { rhosBetween } from '../noise/ar1';
import { requireNoise, type NoiseModel } from '../noise/model';
import { oneOverFSpectrum } from '../noise/one-over-f';
import type { TimeBase } from '../noise/whitener';
import type { Random } from '../random';

/** One draw of a run's noise. */
export type NoiseMaker = (random: Random) => Float64Array;

/**
 * Draws of normal noise with the correlation of a model and variance 1 at every volume (1/f: variance 1 on average
 * once the mean is off).
 *
 * - AR(1): x₀ = z₀, x_t = ρ x_{t−1} + √(1−ρ²) z_t, stationary from the first volume; ρ follows uneven times.
 * - AR(1) + white: √share · AR(1) + √(1−share) · white.
 * - 1/f: white noise through the circular filter √S.
 * - given: each volume from its best prediction by those before (Durbin–Levinson).
 * Errors: `EngineError` for numbers outside the model's domain, 1/f or a given autocorrelation at uneven times.
 */
export function noiseMaker(noise: NoiseModel, base: TimeBase): NoiseMaker {
  requireNoise(noise);
  const { volumes } = base;
  const white: NoiseMaker = (random) => Float64Array.from({ length: volumes }, () => random.normal());
  switch (noise.kind) {
    case 'white':
      return white;
    case 'ar1':
      return autoregressive(noise.rho, noise.rhoTr, base);
    case 'ar1-white': {
      const slow = autoregressive(noise.rho, noise.rhoTr, base);
      const a = Math.sqrt(noise.share);
      const b = Math.sqrt(1 - noise.share);
      return (random) => {
        const out = slow(random);
        return out.map((value) => a * value + b * random.normal());
      };
    }
    case 'one-over-f':
      requireEven(base, '1/f noise');
      return circular(oneOverFSpectrum(noise.exponent, volumes), white);
    case 'given':
      requireEven(base, 'given autocorrelation');
      return predicted(noise.correlations, volumes);
  }
}

function autoregressive(rho: number, rhoTr: number, base: TimeBase): NoiseMaker {
  const rhos = rhosBetween(rho, rhoTr, base);
  return (random) => {
    const out = new Float64Array(base.volumes);
    for (let t = 0; t < out.length; t++) {
      const rho = rhos[t]!; // 0 at the first volume
      out[t] = rho * (t > 0 ? out[t - 1]! : 0) + Math.sqrt(1 - rho * rho) * random.normal();
    }
    return out;
  };
}

function circular(spectrum: Float64Array, white: NoiseMaker): NoiseMaker {
  const n = spectrum.length;
  const turns = Float64Array.from({ length: n }, (_, i) => cos((2 * Math.PI * i) / n));
  const filter = Float64Array.from({ length: n }, (_, lag) => {
    let sum = 0;
    for (let k = 1; k < n; k++) sum += Math.sqrt(spectrum[k]!) * turns[(k * lag) % n]!;
    return sum / n;
  });
  return (random) => {
    const z = white(random);
    return z.map((_, t) => {
      let sum = 0;
      for (let i = 0; i < n; i++) sum += filter[t >= i ? t - i : t - i + n]! * z[i]!;
      return sum;
    });
  };
}

function predicted(correlations: readonly number[], volumes: number): NoiseMaker {
  const r = (lag: number) => (lag === 0 ? 1 : (correlations[lag - 1] ?? 0));
  const predictors: Float64Array[] = [new Float64Array(0)];
  const deviations = new Float64Array(volumes).fill(1);
  let variance = 1;
  for (let n = 1; n < volumes; n++) {
    const before = predictors[n - 1]!;
    let left = r(n);
    for (let k = 0; k < n - 1; k++) left -= before[k]! * r(n - 1 - k);
    const partial = left / variance;
    variance *= 1 - partial * partial;
    if (!(variance > 1e-12))
      throw new EngineError(
        `given autocorrelation up to lag ${n}`,
        r(n),
        'values that some noise can have (a positive definite matrix)',
        'Estimate them from data, or let them fall off to 0.'
      );
    const here = new Float64Array(n);
    for (let k = 0; k < n - 1; k++) here[k] = before[k]! - partial * before[n - 2 - k]!;
    here[n - 1] = partial;
    predictors.push(here);
    deviations[n] = Math.sqrt(variance);
  }
  return (random) => {
    const out = new Float64Array(volumes);
    for (let n = 0; n < volumes; n++) {
      let value = deviations[n]! * random.normal();
      predictors[n]!.forEach((weight, k) => (value += weight * out[n - 1 - k]!));
      out[n] = value;
    }
    return out;
  };
}

function requireEven(base: TimeBase, subject: string): void {
  if (base.times !== null)
    throw new EngineError(subject, 'uneven volume times', 'even times', 'Use AR(1) noise here.');
}
