import { requireSequence } from './require';

export interface RunLengths {
  /** Longest run of one kind, over all kinds; 0 for an empty sequence. */
  readonly longest: number;
  /** Longest run of each kind. */
  readonly byKind: number[];
  /** Share of trials (after the first) that repeat the kind before. */
  readonly repetitionRate: number;
}

/**
 * How long the same kind comes in a row.
 * @example runLengthsOf([0, 0, 1], 2).byKind // [2, 1]
 */
export function runLengthsOf(sequence: ArrayLike<number>, kinds: number): RunLengths {
  requireSequence(sequence, kinds);
  const byKind = new Array<number>(kinds).fill(0);
  let run = 0;
  let repeats = 0;
  for (let t = 0; t < sequence.length; t++) {
    const kind = sequence[t]!;
    const isRepeat = t > 0 && sequence[t - 1] === kind;
    if (isRepeat) repeats++;
    run = isRepeat ? run + 1 : 1;
    byKind[kind] = Math.max(byKind[kind]!, run);
  }
  const repetitionRate = sequence.length > 1 ? repeats / (sequence.length - 1) : 0;
  return { longest: Math.max(0, ...byKind), byKind, repetitionRate };
}
