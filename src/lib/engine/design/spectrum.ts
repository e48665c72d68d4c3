import { cos, sin } from '../elementary';
import { EngineError, requirePositive } from '../errors';
import type { DesignEvent } from '../convolution/event';
import { regressor } from '../convolution/regressor';
import { dot, centred } from '../linalg/vector';
import type { Response } from '../response/response';
import { gainOf } from '../response/transfer';
import type { Hertz, Seconds } from '../units';
import { residualOf } from './information';
import { prepareSetting } from './setting';

/** Energy by frequency: entry k belongs to `frequencies[k]` = (k+1)/(N·TR), up to 1/(2·TR). */
export interface Spectrum {
  frequencies: Float64Array;
  energy: Float64Array;
}

/**
 * The frequencies of a run: k/(N·TR) for k = 1…⌊N/2⌋, Hz.
 * @example runFrequencies(5, 2) // 0.1, 0.2
 */
export function runFrequencies(volumes: number, tr: Seconds): Float64Array {
  requirePositive('repetition time', tr, 'Give the TR in seconds.');
  return Float64Array.from({ length: Math.floor(volumes / 2) }, (_, k) => (k + 1) / (volumes * tr));
}

/**
 * One-sided periodogram of a column at even volumes. The energies add up to the centred sum of squares (Parseval),
 * so each is the part of the column's variance that lies at that frequency.
 * @param values one value per volume
 */
export function energySpectrum(values: Float64Array, tr: Seconds): Spectrum {
  const volumes = values.length;
  const frequencies = runFrequencies(volumes, tr);
  const turn = (2 * Math.PI) / volumes;
  const cosines = Float64Array.from({ length: volumes }, (_, i) => cos(turn * i));
  const sines = Float64Array.from({ length: volumes }, (_, i) => sin(turn * i));
  const middle = centred(values);
  const energy = frequencies.map((_, index) => {
    const k = index + 1;
    let [re, im] = [0, 0];
    for (let n = 0; n < volumes; n += 1) {
      re += middle[n]! * cosines[(k * n) % volumes]!;
      im += middle[n]! * sines[(k * n) % volumes]!;
    }
    // Every frequency but the highest of an even run also stands for its mirror image.
    return ((2 * k === volumes ? 1 : 2) * (re * re + im * im)) / volumes;
  });
  return { frequencies, energy };
}

/** |U(f)|² of a train of events: impulses e^(−2πif·onset), boxcars times duration·sinc. */
export function stimulusEnergy(events: readonly DesignEvent[], f: Hertz): number {
  let [re, im] = [0, 0];
  for (const { onset, duration, height = 1 } of events) {
    const half = Math.PI * f * duration;
    const area = duration === 0 ? 1 : half === 0 ? duration : (duration * sin(half)) / half;
    const angle = -2 * Math.PI * f * (onset + duration / 2);
    re += height * area * cos(angle);
    im += height * area * sin(angle);
  }
  return re * re + im * im;
}

export interface SurvivalInput {
  /** Events of one condition, or of a contrast: heights carry weights and scale. */
  events: readonly DesignEvent[];
  response: Response;
  tr: Seconds;
  volumes: number;
  /** When each volume is modelled, even. */
  times: ArrayLike<Seconds>;
  highPass: Seconds | null;
}

/** What is left of a condition's energy, stage by stage. */
export interface Survival {
  frequencies: Float64Array;
  /** |U(f)|² of the events themselves. */
  stimulus: Float64Array;
  /** Periodogram of the regressor: after the response. */
  response: Float64Array;
  /** Periodogram after the drift is taken out as well. */
  filtered: Float64Array;
  /** Σ|U|²|H|² / (max|H|² Σ|U|²) over the run's frequencies: 1 when all stimulus energy sits at the best frequency. */
  shareAfterResponse: number;
  /** ‖Px‖²/‖x − mean‖², exactly: the part of the regressor that the high-pass leaves. */
  shareAfterHighPass: number;
}

/**
 * Energy of a condition (or of a contrast, as one train of weighted events) by frequency, and the share that survives
 * the response and the high-pass. 0 shares for a train without energy.
 * Errors: `EngineError` when times and volumes disagree.
 */
export function survivalOf(input: SurvivalInput): Survival {
  const { events, response, tr, volumes, times, highPass } = input;
  if (times.length !== volumes)
    throw new EngineError('number of volume times', times.length, `${volumes}`, 'Give one time per volume.');
  const values = regressor(events, response, times);
  const { frequencies, energy } = energySpectrum(values, tr);
  const { plain } = prepareSetting({ tr, volumes, highPass, noise: { kind: 'white' } });
  const rest = residualOf(values, plain.q);
  const stimulus = frequencies.map((f) => stimulusEnergy(events, f));
  const gains = frequencies.map((f) => square(gainOf(response, f)));
  const most = gains.reduce((a, b) => Math.max(a, b), 0) * sum(stimulus);
  const total = dot(centred(values), centred(values));
  return {
    frequencies,
    stimulus,
    response: energy,
    filtered: energySpectrum(rest, tr).energy,
    shareAfterResponse: most > 0 ? dot(stimulus, gains) / most : 0,
    shareAfterHighPass: total > 0 ? dot(rest, rest) / total : 0
  };
}

function square(value: number): number {
  return value * value;
}

function sum(values: Float64Array): number {
  return values.reduce((total, value) => total + value, 0);
}

/**
 * Standard deviation of the steady-state signal of a boxcar of `duration` every `interval` seconds:
 * √(2 Σ_k |H(k/T) · d · sinc(kd/T)/T|²), the contrast-to-noise of a periodic design in white noise.
 *
 * Source: Fourier series of the periodic response (Parseval); used to re-derive Bandettini & Cox 2000, Magn Reson Med
 * 43:540–548.
 */
export function steadyStateDeviation(response: Response, duration: Seconds, interval: Seconds): number {
  requirePositive('duration of the periodic event', duration, 'Give it in seconds.');
  requirePositive('interval of the periodic event', interval, 'Give it in seconds.');
  let total = 0;
  let quiet = 0;
  // Single harmonics may vanish (every second of a half-on cycle does), so several small ones in a row end the sum.
  for (let k = 1; k < 4000 && quiet < 8; k += 1) {
    const f = k / interval;
    const half = Math.PI * f * duration;
    const part = square((gainOf(response, f) * duration * sin(half)) / half / interval);
    total += part;
    quiet = part < 1e-18 * total ? quiet + 1 : 0;
  }
  return Math.sqrt(2 * total);
}
