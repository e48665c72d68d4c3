import { requireWhole } from '../errors';
import { seeded } from '../random';

export interface ShuffleDistribution {
  /** The statistic of the sequence itself. */
  readonly observed: number;
  /** Its value in each shuffle, in rising order. */
  readonly values: Float64Array;
  /** Share of shuffles below the observed value, plus half of those equal to it; 0 … 1. */
  readonly rank: number;
  /** The first percentile of the shuffles: a Notice speaks below it. */
  readonly firstPercentile: number;
}

/**
 * A statistic of a sequence beside its values in seeded shuffles of the same counts.
 *
 * @param statistic any number read from a sequence, e.g. its second-order conditional entropy
 * @param shuffles 1,000 unless said otherwise
 * The first percentile is the value at place ⌊shuffles/100⌋ (from 0) in rising order.
 */
export function shuffleDistribution(
  sequence: ArrayLike<number>,
  statistic: (sequence: ArrayLike<number>) => number,
  seed: string,
  shuffles = 1000
): ShuffleDistribution {
  requireWhole('number of shuffles', shuffles, 1, 'Use 1000.');
  const random = seeded(`shuffles/${seed}`);
  const order = Array.from(sequence);
  const observed = statistic(sequence);
  const values = new Float64Array(shuffles);
  for (let i = 0; i < shuffles; i++) values[i] = statistic(random.shuffle(order));
  values.sort();
  let below = 0;
  let equal = 0;
  for (const value of values) {
    // Equal counts in another order of summation may differ in the last bits.
    if (Math.abs(value - observed) <= 1e-12 * Math.max(1, Math.abs(observed))) equal++;
    else if (value < observed) below++;
  }
  return {
    observed,
    values,
    rank: (below + equal / 2) / shuffles,
    firstPercentile: values[Math.floor(shuffles / 100)]!
  };
}
