import { EngineError, requireWhole } from '../errors';
import type { Random } from '../random';

export interface EulerOptions {
  /** How often each ordered pair of neighbours occurs; 1 unless said otherwise. */
  readonly repeats?: number;
  /** Whether a kind may follow itself (then as often as any other); true unless said otherwise. */
  readonly withRepetitions?: boolean;
}

/**
 * A random stream that is counterbalanced to first order exactly: every ordered pair of kinds occurs `repeats` times
 * as neighbours. It has repeats · k² + 1 entries with repetitions of a kind, repeats · k (k − 1) + 1 without, and
 * begins and ends with the same kind.
 *
 * Method: an Euler circuit of the complete directed graph, every circuit equally likely: a random tree of last exits
 * towards the start (Wilson's loop-erased walks), the other exits of each kind in random order.
 * Source: Brooks JL (2012) Psychol Methods 17:600–614; Wilson DB (1996) Proc STOC 296–303; Kandel D et al. (1996)
 * Discrete Appl Math 71:171–185 (the last two from memory; the pairs are counted in the tests).
 * Domain: k ≥ 2 (k ≥ 1 with repetitions), at most 100,000 pairs.
 */
export function counterbalancedStream(
  kinds: number,
  random: Random,
  { repeats = 1, withRepetitions = true }: EulerOptions = {}
): number[] {
  requireWhole('number of trial kinds', kinds, withRepetitions ? 1 : 2, 'Give at least two kinds.');
  requireWhole('number of repeats of each pair', repeats, 1, 'Use 1 or more.');
  const pairs = repeats * kinds * (withRepetitions ? kinds : kinds - 1);
  if (pairs > 100_000)
    throw new EngineError('number of pairs', pairs, 'at most 100000', 'Use fewer repeats.');
  const start = random.int(kinds);
  const lastExit = randomTree(kinds, start, random);
  const exits = Array.from({ length: kinds }, (_, from) => {
    const list: number[] = [];
    for (let to = 0; to < kinds; to++) {
      if (to === from && !withRepetitions) continue;
      for (let i = 0; i < repeats; i++) list.push(to);
    }
    if (from === start) return random.shuffle(list);
    list.splice(list.indexOf(lastExit[from]!), 1);
    return [...random.shuffle(list), lastExit[from]!];
  });
  const used = new Array<number>(kinds).fill(0);
  const stream = [start];
  for (let t = 0, at = start; t < pairs; t++) {
    at = exits[at]![used[at]!++]!;
    stream.push(at);
  }
  return stream;
}

/** For each kind but the root the next one on its way to the root: a uniformly random tree of the complete graph. */
function randomTree(kinds: number, root: number, random: Random): number[] {
  const next = new Array<number>(kinds).fill(-1);
  const isInTree = new Array<boolean>(kinds).fill(false);
  isInTree[root] = true;
  for (let leaf = 0; leaf < kinds; leaf++) {
    // Later exits overwrite earlier ones, which erases the loops of the walk.
    for (let at = leaf; !isInTree[at]; at = next[at]!) {
      const other = random.int(kinds - 1);
      next[at] = other >= at ? other + 1 : other;
    }
    for (let at = leaf; !isInTree[at]; at = next[at]!) isInTree[at] = true;
  }
  return next;
}
