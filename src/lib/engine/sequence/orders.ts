import { EngineError, requireWhole } from '../errors';
import type { Random } from '../random';

function requireCounts(counts: readonly number[]): void {
  for (const n of counts) requireWhole('number of trials', n, 0, 'Give each kind a whole number of trials.');
}

/** All trials in random order. @param counts number of trials of each kind */
export function randomOrder(counts: readonly number[], random: Random): number[] {
  requireCounts(counts);
  return random.shuffle(counts.flatMap((n, kind) => new Array<number>(n).fill(kind)));
}

/**
 * Permuted blocks: `blocks` stretches one after the other, each a random order of the same counts, so that the kinds
 * stay balanced all through the run.
 * Two kinds once in each of three blocks may give 0 1 1 0 0 1.
 * @example permutedBlocks([2], 2, seeded('any')) // [0, 0, 0, 0]
 */
export function permutedBlocks(counts: readonly number[], blocks: number, random: Random): number[] {
  requireWhole('number of blocks', blocks, 1, 'Use at least one block.');
  return Array.from({ length: blocks }, () => randomOrder(counts, random)).flat();
}

/**
 * Blocked: runs of `length` trials of one kind, the kinds taking turns in the given order, `cycles` times.
 * @example blockedOrder([0, 1], 2, 2) // [0, 0, 1, 1, 0, 0, 1, 1]
 */
export function blockedOrder(turns: readonly number[], length: number, cycles: number): number[] {
  requireWhole('length of a block', length, 1, 'Give a block at least one trial.');
  requireWhole('number of cycles', cycles, 1, 'Use at least one.');
  if (turns.length === 0)
    throw new EngineError('order of blocks', turns, 'at least one kind', 'Name a kind.');
  return Array.from({ length: cycles }, () =>
    turns.flatMap((kind) => new Array<number>(length).fill(kind))
  ).flat();
}
