import { EngineError, requireFinite } from '../errors';
import { readContrast, type RowSpace } from './row-space';

/** A question put to the design: one weight per column. */
export interface Contrast {
  name: string;
  weights: number[];
}

export interface ContrastReport extends Contrast {
  /** Whether the weights lie in the row space of M. */
  estimable: boolean;
  /** 1/(c M⁺ cᵀ), 0 where not estimable: noise SD / √efficiency is the contrast's standard error. Never NaN. */
  efficiency: number;
  /** Columns that cannot be told apart (nuisance ones included); empty where estimable. */
  confounded: string[];
  /** In words, why the efficiency is 0; null where estimable. */
  reason: string | null;
}

/** Throws `EngineError` unless there is one finite weight per column. */
export function requireContrast(contrast: Contrast, columns: number): Contrast {
  if (contrast.weights.length !== columns)
    throw new EngineError(
      `number of weights of contrast “${contrast.name}”`,
      contrast.weights.length,
      `${columns}, one per column`,
      'Give every column a weight; 0 leaves it out.'
    );
  for (const weight of contrast.weights)
    requireFinite(`weight of contrast “${contrast.name}”`, weight, 'Give every column a number.');
  return contrast;
}

/**
 * Efficiency of one contrast, or 0 with the reason.
 * @param names column names, for the words
 * @param isEmpty per column: whether it is 0 in all runs (no event reaches a volume)
 * @param nuisanceOf nuisance columns that take part in a blind direction, by name
 */
export function reportContrast(
  contrast: Contrast,
  space: RowSpace,
  names: readonly string[],
  isEmpty: readonly boolean[],
  nuisanceOf: (direction: readonly number[]) => string[]
): ContrastReport {
  requireContrast(contrast, names.length);
  const { name, weights } = contrast;
  const refused = (confounded: string[], reason: string): ContrastReport => ({
    name,
    weights,
    estimable: false,
    efficiency: 0,
    confounded,
    reason
  });
  if (weights.every((weight) => weight === 0))
    return refused(
      [],
      'All weights are 0, so the contrast asks nothing. Give at least one weight other than 0.'
    );
  const reading = readContrast(space, weights);
  if (reading.estimable)
    return { name, weights, estimable: true, efficiency: 1 / reading.variance, confounded: [], reason: null };

  const empty = names.filter((_, j) => isEmpty[j]! && weights[j] !== 0);
  if (empty.length > 0)
    return refused(
      empty,
      `No event of ${listed(empty)} reaches a volume. Place one on the run, or leave it out of the contrast.`
    );
  const largest = Math.max(...reading.blind.map(Math.abs));
  const involved = names.filter((_, j) => Math.abs(reading.blind[j]!) > 1e-6 * largest);
  const nuisance = nuisanceOf(reading.blind);
  const confounded = [...involved, ...nuisance];
  if (involved.length === 1 && nuisance.length > 0)
    return refused(confounded, `${listed(involved)} cannot be told from ${listed(nuisance)}. ${SLOW}`);
  if (confounded.length === 1)
    return refused(confounded, `Nothing of ${listed(confounded)} is left beside drift and noise. ${SLOW}`);
  return refused(
    confounded,
    `${listed(confounded)} cannot be told apart. Vary the order and gaps of their events, or model fewer columns.`
  );
}

/** The way out where a column is as slow as what is taken out beside it. */
const SLOW = 'Let it change faster than the drift does, or choose a longer cutoff.';

function listed(names: readonly string[]): string {
  const quoted = names.map((name) => `“${name}”`);
  if (quoted.length <= 1) return quoted.join('');
  return `${quoted.slice(0, -1).join(', ')} and ${quoted.at(-1)}`;
}
