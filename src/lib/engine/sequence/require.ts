import { EngineError, requireWhole } from '../errors';

/** Throws unless every entry is a whole number from 0 to kinds − 1; returns the sequence. */
export function requireSequence(sequence: ArrayLike<number>, kinds: number): ArrayLike<number> {
  requireWhole('number of trial kinds', kinds, 1, 'Give at least one kind of trial.');
  for (let t = 0; t < sequence.length; t++) {
    const kind = sequence[t]!;
    if (!Number.isInteger(kind) || kind < 0 || kind >= kinds)
      throw new EngineError(
        `trial kind at place ${t + 1}`,
        kind,
        `a whole number from 0 to ${kinds - 1}`,
        'Number the trial kinds from 0.'
      );
  }
  return sequence;
}

/** How often each kind occurs. */
export function countsOf(sequence: ArrayLike<number>, kinds: number): number[] {
  const counts = new Array<number>(kinds).fill(0);
  for (let t = 0; t < sequence.length; t++) counts[sequence[t]!]!++;
  return counts;
}
