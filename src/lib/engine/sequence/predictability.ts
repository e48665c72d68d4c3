import { exp, log } from '../elementary';
import { EngineError, requireWhole } from '../errors';
import { requireSequence } from './require';

/** What the trials so far say about the next one. */
export interface Predictability {
  /** How many trials back are known. */
  readonly order: number;
  /** Conditional entropy of the next kind, bits; 0: fully predictable. */
  readonly entropy: number;
  /** 2^entropy: the number of equally likely kinds it feels like. */
  readonly perplexity: number;
  /** Share of trials guessed right by always naming the kind that came most often after the same past. */
  readonly bestGuess: number;
}

/**
 * Conditional entropy H(s_t | s_{t−1} … s_{t−order}) and best-guess rate, from the sequence's own counts over its
 * n − order places (linear). A sequence no longer than the order tells nothing: entropy 0, perplexity 1, guess 1.
 *
 * Caution: a short random sequence shows low second-order entropy by itself; compare with shuffles of the same counts
 * (`shuffleDistribution`).
 * Source: Shannon entropy; as a measure of randomness Liu & Frank (2004) NeuroImage 21:387–400; predictability Liu et
 * al. (2001) NeuroImage 13:759–773 (from memory; values checked against the reference set).
 * @example predictabilityOf([0, 1, 0, 1], 2, 1).entropy // 0
 */
export function predictabilityOf(sequence: ArrayLike<number>, kinds: number, order: number): Predictability {
  requireSequence(sequence, kinds);
  requireWhole('number of trials back', order, 0, 'Use 1 for the last trial, 2 for the last two.');
  if (kinds ** order > 2 ** 50)
    throw new EngineError(
      'number of trials back',
      order,
      'so few that the pasts can be numbered',
      'Use 1 or 2.'
    );
  const places = sequence.length - order;
  if (places <= 0) return { order, entropy: 0, perplexity: 1, bestGuess: 1 };
  const after = new Map<number, number[]>();
  for (let t = order; t < sequence.length; t++) {
    let past = 0;
    for (let back = order; back >= 1; back--) past = past * kinds + sequence[t - back]!;
    const counts = after.get(past) ?? new Array<number>(kinds).fill(0);
    counts[sequence[t]!]!++;
    after.set(past, counts);
  }
  let nats = 0;
  let right = 0;
  // In rising order of the past, so that the sum does not depend on where each past was met first.
  for (const past of [...after.keys()].sort((a, b) => a - b)) {
    const counts = after.get(past)!;
    const total = counts.reduce((a, b) => a + b, 0);
    right += Math.max(...counts);
    for (const n of counts) if (n > 0) nats -= n * log(n / total);
  }
  const entropy = Math.max(0, nats / places / LN2);
  return { order, entropy, perplexity: perplexity(entropy), bestGuess: right / places };
}

const LN2 = log(2);

function perplexity(bits: number): number {
  return exp(bits * LN2);
}
