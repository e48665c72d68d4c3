import type { Column } from '../design/setting';
import { EngineError, requireFinite, requireNotNegative } from '../errors';
import { addScaled } from '../linalg/vector';
import type { Random } from '../random';
import type { NoiseMaker } from './noise';

export interface ScanTruth {
  /** Columns of the design, one value per volume, peak 1 for a single trial. */
  readonly columns: readonly Column[];
  /** True effect of each column, percent signal change. */
  readonly effects: readonly number[];
  /** Standard deviation of the noise, percent per volume. */
  readonly noiseSd: number;
  /** Level the signal stands on; 100 makes everything percent. */
  readonly baseline?: number;
}

/**
 * A made-up region signal: baseline + Σ effect · column + noise.
 * @param noise draws of unit variance (`noiseMaker`) for as many volumes as the columns have
 * Errors: `EngineError` where lists do not fit.
 */
export function syntheticScan(truth: ScanTruth, noise: NoiseMaker, random: Random): Float64Array {
  const { columns, effects, noiseSd, baseline = 100 } = truth;
  if (columns.length !== effects.length)
    throw new EngineError(
      'list of effects',
      effects,
      `${columns.length} numbers, one per column`,
      'Use 0 for no effect.'
    );
  requireNotNegative('noise', noiseSd, 'Give the noise in percent per volume, e.g. 1.');
  requireFinite('baseline', baseline, 'Use 100, so that everything is in percent.');
  const out = noise(random).map((value) => baseline + noiseSd * value);
  columns.forEach(({ name, values }, j) => {
    if (values.length !== out.length)
      throw new EngineError(
        `length of column “${name}”`,
        values.length,
        `${out.length} values, one per volume`,
        'Make columns and noise for the same run.'
      );
    addScaled(out, values, requireFinite('effect', effects[j]!, 'Give each column a number.'));
  });
  return out;
}
