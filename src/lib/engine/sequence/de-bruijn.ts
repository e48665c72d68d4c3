import { EngineError, requireWhole } from '../errors';
import type { Random } from '../random';

/**
 * The lexicographically least de Bruijn cycle: k^n entries of 0 … k − 1 in which every word of n entries occurs once,
 * read cyclically. Present it with its first n − 1 entries repeated at the end.
 *
 * Domain: k ≥ 1, n ≥ 1, k^n ≤ 100,000. Source: Fredricksen H, Maiorana J (1978) Discrete Math 23:207–210 (Lyndon
 * words in order, from memory; checked by counting words); use in fMRI: Aguirre GK, Mattar MG, Magis-Weinberg L (2011)
 * NeuroImage 56:1293–1300.
 * @example deBruijn(2, 3) // [0, 0, 0, 1, 0, 1, 1, 1]
 */
export function deBruijn(k: number, n: number): number[] {
  requireWhole('number of trial kinds', k, 1, 'Give at least one kind.');
  requireWhole('order of the cycle', n, 1, 'Use 2 for pairs, 3 for triples.');
  if (k ** n > 100_000)
    throw new EngineError(
      'length of the cycle',
      k ** n,
      'at most 100000',
      'Use a lower order or fewer kinds.'
    );
  const word = [0];
  const out: number[] = [];
  while (word.length > 0) {
    if (n % word.length === 0) out.push(...word);
    // The next Lyndon word: repeat to length n, drop trailing largest letters, raise the last.
    const length = word.length;
    while (word.length < n) word.push(word[word.length - length]!);
    while (word.length > 0 && word[word.length - 1] === k - 1) word.pop();
    if (word.length > 0) word[word.length - 1]!++;
  }
  return out;
}

/** A random relabelling and rotation of the least cycle, opened: k^n + n − 1 entries, every word of n once. */
export function randomDeBruijn(k: number, n: number, random: Random): number[] {
  const cycle = deBruijn(k, n);
  const labels = random.shuffle(Array.from({ length: k }, (_, i) => i));
  const start = random.int(cycle.length);
  return Array.from({ length: cycle.length + n - 1 }, (_, t) => labels[cycle[(start + t) % cycle.length]!]!);
}
