import { EngineError, requireWhole } from '../errors';
import { requireData } from './fit';

export interface TrialAverage {
  /** Mean over trials at each volume of the window. */
  readonly average: Float64Array;
  /** Standard error of each mean (sd with n − 1, over √n); 0 for a single trial. */
  readonly standardError: Float64Array;
  /** Trials whose whole window lies in the run. */
  readonly trials: number;
  /** Whether windows overlap: then the average mixes neighbouring responses; an FIR fit does not. */
  readonly overlaps: boolean;
}

/**
 * Trial averaging: the mean stretch of signal after each onset.
 *
 * @param onsets volume numbers; windows that leave the run are left out
 * @param window number of volumes
 * With windows that do not overlap it equals a finite impulse response fit without a constant.
 * Errors: `EngineError` for gaps, onsets that are not whole, or no complete window.
 */
export function averageTrials(y: Float64Array, onsets: readonly number[], window: number): TrialAverage {
  requireData([], y);
  requireWhole('length of the window', window, 1, 'Give it in volumes, for instance 24 s / TR.');
  for (const onset of onsets)
    if (!Number.isInteger(onset))
      throw new EngineError(
        'onset volume',
        onset,
        'a whole number',
        'Round onsets to volumes, or use an FIR fit.'
      );
  const used = onsets.filter((onset) => onset >= 0 && onset + window <= y.length);
  if (used.length === 0)
    throw new EngineError(
      'trials with a complete window',
      0,
      'at least 1',
      'Shorten the window or add trials.'
    );
  const average = new Float64Array(window);
  const standardError = new Float64Array(window);
  const n = used.length;
  for (let k = 0; k < window; k++) {
    let sum = 0;
    for (const onset of used) sum += y[onset + k]!;
    average[k] = sum / n;
    let squares = 0;
    for (const onset of used) squares += (y[onset + k]! - average[k]!) ** 2;
    standardError[k] = n > 1 ? Math.sqrt(squares / (n - 1) / n) : 0;
  }
  const sorted = [...used].sort((a, b) => a - b);
  const overlaps = sorted.some((onset, i) => i > 0 && onset - sorted[i - 1]! < window);
  return { average, standardError, trials: n, overlaps };
}
