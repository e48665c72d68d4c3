import { residualOf } from '../design/information';
import { orthonormalBasis } from '../linalg/basis';
import { mean } from '../linalg/vector';
import { constant, dctDrift } from '../noise/drift';
import type { Seconds } from '../units';
import { requireData } from './fit';

/**
 * Takes the constant and the cosine drift (cutoff in seconds) out of a signal; with `keepMean` its mean is put back.
 * @returns a new signal of the same length
 * Errors: `EngineError` for gaps, TR ≤ 0, cutoff ≤ 0.
 */
export function removeDrift(
  y: Float64Array,
  tr: Seconds,
  cutoff: Seconds,
  { keepMean = false }: { keepMean?: boolean } = {}
): Float64Array {
  requireData([], y);
  const basis = orthonormalBasis([constant(y.length), ...dctDrift(y.length, tr, cutoff)]);
  const rest = residualOf(y, basis.q);
  const level = keepMean ? mean(y) : 0;
  return rest.map((value) => value + level);
}
