import seedrandom from 'seedrandom';
import { cos, log, sin } from './elementary';
import { EngineError } from './errors';

/** A seeded stream of random numbers; two streams with the same seed give the same bytes on any machine. */
export interface Random {
  /** Uniform in (0, 1) with 53 random bits (0 itself never comes). */
  next(): number;
  /** Uniform whole number in 0 … n − 1, without bias. Domain: whole n, 1 ≤ n ≤ 2^32. */
  int(n: number): number;
  /** Shuffles the array in place (every order equally likely) and returns it. */
  shuffle<T>(list: T[]): T[];
  /** Standard normal. */
  normal(): number;
  /** Exponential with the given mean. */
  exponential(mean: number): number;
}

/**
 * Opens a stream for a seed text.
 *
 * Generator: xor4096 of the seedrandom package (period near 2^4128), which uses whole-number arithmetic alone.
 * Source: Brent RP (2010) Some long-period random number generators using shifts and xors, arXiv:1004.3115.
 * Shuffle: Fisher–Yates from the end. Normal: Box & Muller (1958), both values used, with the engine's own
 * functions.
 */
export function seeded(seed: string): Random {
  // A prefix keeps an empty seed from meaning 'take the clock', and numeric texts from a path of their own.
  const source = seedrandom.xor4096(`ebbline:${seed}`);
  let spare: number | null = null;

  const int = (n: number): number => {
    if (!Number.isInteger(n) || n < 1 || n > 4294967296)
      throw new EngineError(
        'range of a random number',
        n,
        'a whole number from 1 to 4294967296',
        'Give the count of outcomes.'
      );
    // Values beyond the last full multiple of n would make the low results likelier: drawn again.
    const limit = 4294967296 - (4294967296 % n);
    let value = source.int32() >>> 0;
    while (value >= limit) value = source.int32() >>> 0;
    return value % n;
  };

  return {
    next: () => source.double(),
    int,
    shuffle(list) {
      for (let i = list.length - 1; i > 0; i--) {
        const j = int(i + 1);
        const held = list[i]!;
        list[i] = list[j]!;
        list[j] = held;
      }
      return list;
    },
    normal() {
      if (spare !== null) {
        const value = spare;
        spare = null;
        return value;
      }
      const radius = Math.sqrt(-2 * log(source.double()));
      const angle = 2 * Math.PI * source.double();
      spare = radius * sin(angle);
      return radius * cos(angle);
    },
    exponential: (mean) => -mean * log(source.double())
  };
}
