import { requirePositive, requireWhole } from '../errors';
import { cos } from '../elementary';
import type { Seconds } from '../units';

/** A column of ones, length N. */
export function constant(volumes: number): Float64Array {
  requireWhole('number of volumes', volumes, 1, 'Give the run at least one volume.');
  return new Float64Array(volumes).fill(1);
}

/**
 * Number of drift cosines: floor(2·N·TR/cutoff), not counting the constant and never more than N − 1.
 * A cutoff above twice the run length gives none.
 * @example driftCount(200, 2, 128) // 6
 */
export function driftCount(volumes: number, tr: Seconds, cutoff: Seconds): number {
  requireWhole('number of volumes', volumes, 1, 'Give the run at least one volume.');
  requirePositive('repetition time', tr, 'Give the TR in seconds.');
  requirePositive('high-pass cutoff', cutoff, 'Use 128 s, or no high-pass at all.');
  // The small addition keeps 2·160·0.8/128 = 2 from falling to 1 by a binary fraction.
  return Math.min(volumes - 1, Math.floor((2 * volumes * tr) / cutoff + 1e-9));
}

/**
 * Discrete-cosine drift of one run: columns k = 1…n, √(2/N) cos(πk(2i+1)/(2N)), n = `driftCount`. The constant is a
 * column of its own. Orthonormal.
 *
 * @returns n columns of length N
 * Variant: n cosines beside the constant (one reference library counts the constant among the n).
 * Source: the discrete cosine transform, type II; use as drift regressors: Friston et al. 2000, NeuroImage 12:196–208.
 * @example dctDrift(200, 2, 128)[0][0] // 0.099996915764479
 */
export function dctDrift(volumes: number, tr: Seconds, cutoff: Seconds): Float64Array[] {
  const scale = Math.sqrt(2 / volumes);
  return Array.from({ length: driftCount(volumes, tr, cutoff) }, (_, index) => {
    const step = (Math.PI * (index + 1)) / (2 * volumes);
    return Float64Array.from({ length: volumes }, (_value, i) => scale * cos(step * (2 * i + 1)));
  });
}

/**
 * The same cosines read at unevenly spaced volume times (clustered acquisition): cos(πk((t − t₀)/span + 1/(2N))) with
 * span = (t_last − t₀)·N/(N−1), which is N·TR when the times are even. No longer exactly orthogonal.
 */
export function dctDriftAt(times: ArrayLike<Seconds>, cutoff: Seconds): Float64Array[] {
  const volumes = times.length;
  if (volumes < 2) return [];
  const first = times[0]!;
  const span = ((times[volumes - 1]! - first) * volumes) / (volumes - 1);
  const scale = Math.sqrt(2 / volumes);
  return Array.from({ length: driftCount(volumes, span / volumes, cutoff) }, (_, index) =>
    Float64Array.from(
      { length: volumes },
      (_value, i) => scale * cos(Math.PI * (index + 1) * ((times[i]! - first) / span + 1 / (2 * volumes)))
    )
  );
}

/**
 * Polynomial drift of orders 1…`order` (the constant is a column of its own): Legendre polynomials at the volumes,
 * u = (2i + 1 − N)/N, by the three-term recurrence, scaled to length 1.
 *
 * @returns `order` columns of length N; orders above N − 1 are left out, they would add nothing
 * Source: Legendre polynomials, textbook.
 * @example polynomialDrift(3, 1) // [[-1 / Math.SQRT2, 0, 1 / Math.SQRT2]]
 */
export function polynomialDrift(volumes: number, order: number): Float64Array[] {
  requireWhole('number of volumes', volumes, 1, 'Give the run at least one volume.');
  requireWhole('order of the polynomial drift', order, 0, 'Use 0 for none, 3 for slow bends.');
  const u = Float64Array.from({ length: volumes }, (_, i) => (2 * i + 1 - volumes) / volumes);
  const columns: Float64Array[] = [constant(volumes), u];
  for (let n = 2; n <= order; n += 1)
    columns.push(
      u.map((x, i) => ((2 * n - 1) * x * columns[n - 1]![i]! - (n - 1) * columns[n - 2]![i]!) / n)
    );
  return columns.slice(1, Math.min(order, volumes - 1) + 1).map((column) => {
    const length = Math.sqrt(column.reduce((sum, value) => sum + value * value, 0));
    return column.map((value) => value / length);
  });
}
