import { requireNotNegative, EngineError } from '../errors';
import { counterbalanceOf, type Counterbalance } from './counterbalance';
import { predictabilityOf, type Predictability } from './predictability';
import { countsOf, requireSequence } from './require';
import { runLengthsOf, type RunLengths } from './runs';
import { shuffleDistribution, type ShuffleDistribution } from './shuffles';

export interface SequenceReport {
  readonly counts: number[];
  /** Σ |share of each kind − share wanted|, 0 … 2. */
  readonly frequencyDeviation: number;
  readonly counterbalance: Counterbalance;
  /** Knowing nothing, the last trial, the last two. */
  readonly predictability: readonly [Predictability, Predictability, Predictability];
  /** Entropy given the last trial and the last two, beside shuffles of the same counts. */
  readonly entropyShuffles: readonly [ShuffleDistribution, ShuffleDistribution];
  readonly runs: RunLengths;
}

export interface SequenceReportOptions {
  /** Order R of the counterbalance; 3 unless said otherwise. */
  readonly order?: number;
  /** Wanted frequency of each kind, in any unit; equal unless said otherwise. */
  readonly wanted?: readonly number[];
  readonly seed?: string;
  readonly shuffles?: number;
}

/**
 * Everything that can be said about the order of trials alone.
 * Errors: `EngineError` for kinds out of range or wanted frequencies that do not fit.
 */
export function sequenceReport(
  sequence: ArrayLike<number>,
  kinds: number,
  { order = 3, wanted, seed = '', shuffles = 1000 }: SequenceReportOptions = {}
): SequenceReport {
  requireSequence(sequence, kinds);
  const entropyOf = (back: number) => (list: ArrayLike<number>) =>
    predictabilityOf(list, kinds, back).entropy;
  return {
    counts: countsOf(sequence, kinds),
    frequencyDeviation: frequencyDeviation(sequence, kinds, wanted),
    counterbalance: counterbalanceOf(sequence, kinds, order),
    predictability: [
      predictabilityOf(sequence, kinds, 0),
      predictabilityOf(sequence, kinds, 1),
      predictabilityOf(sequence, kinds, 2)
    ],
    entropyShuffles: [
      shuffleDistribution(sequence, entropyOf(1), seed, shuffles),
      shuffleDistribution(sequence, entropyOf(2), seed, shuffles)
    ],
    runs: runLengthsOf(sequence, kinds)
  };
}

/**
 * Σ |share − wanted share| over the kinds: 0 when met, 2 at most. An empty sequence deviates by 0.
 * @example frequencyDeviation([0, 0, 0, 1], 2) // 0.5
 */
export function frequencyDeviation(
  sequence: ArrayLike<number>,
  kinds: number,
  wanted: readonly number[] = new Array<number>(kinds).fill(1)
): number {
  requireSequence(sequence, kinds);
  if (wanted.length !== kinds)
    throw new EngineError('list of wanted frequencies', wanted, `${kinds} numbers`, 'Give each kind one.');
  for (const share of wanted) requireNotNegative('wanted frequency', share, 'Use 1 for each kind alike.');
  const total = wanted.reduce((a, b) => a + b, 0);
  if (total === 0)
    throw new EngineError('sum of wanted frequencies', 0, 'a number above 0', 'Give a kind a frequency.');
  if (sequence.length === 0) return 0;
  return countsOf(sequence, kinds).reduce(
    (sum, n, k) => sum + Math.abs(n / sequence.length - wanted[k]! / total),
    0
  );
}
