import { requireWhole } from '../errors';
import { countsOf, requireSequence } from './require';

/** How the trials `lag` places apart follow one another. */
export interface LagTable {
  readonly lag: number;
  /** m[i][j]: how often kind j stands `lag` places after kind i; linear, not cyclic. */
  readonly transitions: number[][];
  /** (n − lag) p_i p_j with p from the sequence's own counts. */
  readonly expected: number[][];
}

export interface Counterbalance {
  readonly lags: LagTable[];
  /** Σ over lags and pairs of |m − expected|. */
  readonly deviation: number;
  /** The same with every term rounded down: 0 is as even as whole numbers allow. */
  readonly flooredDeviation: number;
  /** Σ (m − expected)²/expected at lag 1; pairs that cannot occur are left out. */
  readonly chiSquare: number;
}

/**
 * Counterbalance to order R: for each lag 1 … R the table of transitions beside what independence would give.
 *
 * @param sequence kind of each trial, 0 … kinds − 1
 * @param order R, at least 1; lags as long as the sequence or longer have empty tables
 * Source: criterion Σ floor|m − (n − r) p_i p_j| as in Wager & Nichols (2003) NeuroImage 18:293–309 and Kao et al.
 * (2009) NeuroImage 44:849–856 (formula from memory; values checked against the reference set).
 * @example counterbalanceOf([0, 1, 0, 1], 2, 1).lags[0].transitions // [[0, 2], [1, 0]]
 */
export function counterbalanceOf(sequence: ArrayLike<number>, kinds: number, order: number): Counterbalance {
  requireSequence(sequence, kinds);
  requireWhole('order of counterbalance', order, 1, 'Use 1 for the next trial, 3 for the next three.');
  const counts = countsOf(sequence, kinds);
  const lags = Array.from({ length: order }, (_, r) => lagTable(sequence, counts, r + 1));
  let deviation = 0;
  let flooredDeviation = 0;
  let chiSquare = 0;
  for (const { lag, transitions, expected } of lags)
    for (let i = 0; i < kinds; i++)
      for (let j = 0; j < kinds; j++) {
        const off = Math.abs(transitions[i]![j]! - expected[i]![j]!);
        deviation += off;
        // The small addition keeps 1 − 1e−16 from falling to 0 by rounding.
        flooredDeviation += Math.floor(off + 1e-9);
        if (lag === 1 && expected[i]![j]! > 0) chiSquare += (off * off) / expected[i]![j]!;
      }
  return { lags, deviation, flooredDeviation, chiSquare };
}

function lagTable(sequence: ArrayLike<number>, counts: readonly number[], lag: number): LagTable {
  const length = sequence.length;
  const transitions = counts.map(() => counts.map(() => 0));
  for (let t = 0; t + lag < length; t++) transitions[sequence[t]!]![sequence[t + lag]!]!++;
  const pairs = Math.max(0, length - lag);
  const expected = counts.map((a) =>
    counts.map((b) => (length === 0 ? 0 : (pairs * a * b) / (length * length)))
  );
  return { lag, transitions, expected };
}
