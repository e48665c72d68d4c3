import { EngineError, requirePositive, requireWhole } from '../errors';
import { MICRO, type Seconds } from '../units';
import { DOUBLE_GAMMA, doubleGamma, type DoubleGammaParameters } from './double-gamma';
import { dispersionDerivative, timeDerivative } from './derivatives';
import { gammaMixture } from './gamma-mixture';
import type { Response } from './response';
import { trigonometricSum, type Wave } from './trigonometric';

/**
 * A basis is a list of responses: each condition gets one column per member.
 */
export type ResponseBasis = Response[];

/** The double gamma with its analytic time and dispersion derivatives: three columns per condition. */
export function doubleGammaWithDerivatives(parameters: Partial<DoubleGammaParameters> = {}): ResponseBasis {
  const all = { ...DOUBLE_GAMMA, ...parameters };
  const h = doubleGamma(all);
  return [h, timeDerivative(h), dispersionDerivative(all)];
}

/**
 * Finite impulse response: member j is 1 on [j·width, (j+1)·width), else 0; `lags` members. At a volume every TR and
 * width = TR, column j is 1 at volume v + j for every event that starts in the TR before volume v or on it.
 *
 * Edges are read to half a microsecond. Meant for events of duration 0 (see `asImpulses`); with a duration the column
 * holds the seconds of overlap.
 * Source: Dale AM (1999) Hum Brain Mapp 8:109–114.
 */
export function finiteImpulseResponse(lags: number, width: Seconds): ResponseBasis {
  requireWhole('number of lags', lags, 1, 'Use the window length over the width, for instance 24 s / TR.');
  requirePositive('width of a lag', width, 'Use the TR, or a finer grid.');
  return Array.from({ length: lags }, (_, j) => {
    const start = j * width;
    return {
      name: `Lag ${j} (${Number((j * width).toFixed(6))} s)`,
      length: (j + 1) * width,
      value: (t) => (t >= 0 && Math.floor((t + MICRO / 2) / width) === j ? 1 : 0),
      integral: (t) => Math.max(0, Math.min(t - start, width)),
      peak: { time: start, value: 1 }
    };
  });
}

export interface WaveSetOptions {
  /** Window length in seconds. */
  window: Seconds;
  /** Number of sine–cosine pairs. */
  order: number;
  /** Multiply by the Hanning window (1 − cos(2πt/T))/2. */
  isWindowed: boolean;
  /** Keep the column without a wave (the window itself, or the constant). */
  hasConstant?: boolean;
}

/**
 * Sines and cosines on [0, T]: w, then w·sin(2πjt/T), w·cos(2πjt/T) for j = 1…K, with w the Hanning window or 1;
 * 2K + 1 columns, 2K without the constant. Not orthogonalised. Integrals closed (products turned into sums).
 *
 * Source: Josephs O, Turner R, Friston K (1997) Event-related fMRI. Hum Brain Mapp 5:243–248 (from memory).
 */
export function sinesAndCosines({
  window,
  order,
  isWindowed,
  hasConstant = true
}: WaveSetOptions): ResponseBasis {
  requirePositive('window of the sine set', window, 'Use 32 s.');
  requireWhole('order of the sine set', order, hasConstant ? 0 : 1, 'Use 3 or 4.');
  const waves: [string, Wave[]][] = [];
  if (hasConstant) waves.push([isWindowed ? 'Window' : 'Constant', [{ kind: 'cos', cycles: 0, weight: 1 }]]);
  for (let j = 1; j <= order; j += 1) {
    waves.push([`Sine ${j}`, [{ kind: 'sin', cycles: j, weight: 1 }]]);
    waves.push([`Cosine ${j}`, [{ kind: 'cos', cycles: j, weight: 1 }]]);
  }
  return waves.map(([name, list]) =>
    trigonometricSum(name, isWindowed ? list.flatMap(hanning) : list, window)
  );
}

/** The Hanning window times one wave, as a sum of waves. */
function hanning({ kind, cycles, weight }: Wave): Wave[] {
  if (cycles === 0)
    return [
      { kind: 'cos', cycles: 0, weight: weight / 2 },
      { kind: 'cos', cycles: 1, weight: -weight / 2 }
    ];
  return [
    { kind, cycles, weight: weight / 2 },
    { kind, cycles: cycles + 1, weight: -weight / 4 },
    { kind, cycles: cycles - 1, weight: -weight / 4 }
  ];
}

/**
 * Three gamma densities g(t; m, 1) with m = 4, 8, 16: mean and variance m, peaks at 3, 7 and 15 s. Area 1 each
 * (before the end of the support).
 */
export function threeGammas(length: Seconds = 32, shapes: readonly number[] = [4, 8, 16]): ResponseBasis {
  if (shapes.length === 0)
    throw new EngineError('list of gamma shapes', shapes, 'at least one shape', 'Use 4, 8, 16.');
  return shapes.map((shape) =>
    gammaMixture(`Gamma density of shape ${shape}`, [{ weight: 1, shape, scale: 1 }], length)
  );
}
