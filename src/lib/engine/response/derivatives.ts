import { log } from '../elementary';
import type { Seconds } from '../units';
import { certifiedIntegral } from './certified-integral';
import { combination } from './combination';
import { DOUBLE_GAMMA, doubleGamma, doubleGammaTerms, type DoubleGammaParameters } from './double-gamma';
import { digamma, gammaDensity } from './gamma';
import type { GammaMixture } from './gamma-mixture';
import { maximise } from './peak';
import type { Response } from './response';

/**
 * h′(t), the analytic time derivative of a gamma-based response: moves its peak in a linear model. Its integral is
 * h(t) − h(0), exactly. Scale of the formula (per second of the parent), never rescaled.
 *
 * Source: Friston et al. 1998, Magn Reson Med 39:41–52 (first-order expansion in time).
 */
export function timeDerivative(base: GammaMixture): Response {
  const { length, slope } = base;
  const start = base.value(0);
  const integral = (t: Seconds) => (t <= 0 ? 0 : base.value(Math.min(t, length)) - start);
  const reach = Number.isFinite(length) ? length : 10 * base.peak.time;
  const curvature = (t: Seconds) => slope(t + 1e-5) - slope(t - 1e-5);
  const peak = maximise(slope, curvature, 0, reach);
  return { name: `Time derivative of ${base.name}`, length, value: slope, integral, peak };
}

/**
 * h(t) − h(t − 1 s): the time derivative as a 1 s difference, the variant of the package the double gamma comes from.
 * Both terms untruncated inside the support of the parent.
 * @param step seconds
 */
export function timeDifference(parameters: Partial<DoubleGammaParameters> = {}, step: Seconds = 1): Response {
  const all = { ...DOUBLE_GAMMA, ...parameters };
  const endless = doubleGamma({ ...all, length: Infinity });
  const parts = [
    { weight: 1, response: endless },
    { weight: -1, response: endless, shift: step }
  ];
  return combination(`Double gamma less itself ${step} s later`, parts, all.length);
}

/**
 * −∂h/∂(dispersion of the response), undershoot unchanged: widens the peak in a linear model.
 * −g(t; a, d) [t/d² − a/d − (a/d)(ln(t/d) − ψ(a))] with a = delay/d; at d = 1 −g(t;6,1)(t − 6 − 6 ln t + 6ψ(6)).
 *
 * The integral has no elementary form and is certified (`certifiedIntegral`).
 * Source: derived from the formula; the sign follows the package's (h(d) − h(1.01 d))/0.01.
 */
export function dispersionDerivative(parameters: Partial<DoubleGammaParameters> = {}): Response {
  const all = { ...DOUBLE_GAMMA, ...parameters };
  const { shape, scale } = doubleGammaTerms(all)[0]!;
  const gamma = gammaDensity(shape, scale);
  const psi = digamma(shape);
  // Untruncated: after 12 standard deviations of the response nothing is left of it.
  const length = Number.isFinite(all.length)
    ? all.length
    : all.onset + scale * (shape + 12 * Math.sqrt(shape)) + 40;
  const value = (t: Seconds) => {
    const x = (t - all.onset) / scale;
    if (!(x > 0) || t > length) return 0;
    return (-gamma.density(t - all.onset) / scale) * (x - shape - shape * (log(x) - psi));
  };
  const inner = certifiedIntegral((t) => value(t + all.onset), length - all.onset);
  const slope = (t: Seconds) => value(t + 1e-5) - value(t - 1e-5);
  return {
    name: 'Dispersion derivative of the double gamma',
    length,
    value,
    integral: (t) => inner(Math.min(t, length) - all.onset),
    peak: maximise(value, slope, 0, length)
  };
}

/**
 * (h(t; d) − h(t; d + δ))/δ with δ = 0.01: the dispersion derivative as a 1 % difference, the variant of the package
 * the double gamma comes from. Undershoot unchanged, neither term normalised.
 */
export function dispersionDifference(parameters: Partial<DoubleGammaParameters> = {}, step = 0.01): Response {
  const all = { ...DOUBLE_GAMMA, ...parameters };
  const wider = doubleGamma({ ...all, dispersion: all.dispersion + step, length: Infinity });
  const parts = [
    { weight: 1 / step, response: doubleGamma({ ...all, length: Infinity }) },
    { weight: -1 / step, response: wider }
  ];
  return combination('Double gamma less a wider one', parts, all.length);
}
