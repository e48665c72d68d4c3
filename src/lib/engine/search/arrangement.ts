import type { Random } from '../random';
import type { RuleSteps, SearchRules } from './rules';

/**
 * One candidate in whole numbers: kind of each trial, steps of the gap after it above the fewest allowed, and grid
 * index of its onset. `extra` of the last trial is 0 and unused.
 */
export interface Arrangement {
  readonly order: Int32Array;
  readonly extra: Int32Array;
  readonly places: Int32Array;
}

export function emptyArrangement(trials: number): Arrangement {
  return { order: new Int32Array(trials), extra: new Int32Array(trials), places: new Int32Array(trials) };
}

export function copyArrangement(from: Arrangement, to: Arrangement): void {
  to.order.set(from.order);
  to.extra.set(from.extra);
  to.places.set(from.places);
}

/** Writes the onsets of trials low … high that follow from kinds and gaps. */
export function placeBetween(arrangement: Arrangement, steps: RuleSteps, low: number, high: number): void {
  const { order, extra, places } = arrangement;
  if (low === 0) places[0] = steps.first;
  for (let t = Math.max(1, low); t <= high; t++)
    places[t] = places[t - 1]! + steps.least[order[t - 1]!]! + extra[t - 1]!;
}

/**
 * A random candidate that keeps every rule: kinds drawn trial by trial, never into a dead end of 'no more than k in a
 * row'; gaps from an exponential draw, rounded to the grid and mended to the exact sum.
 */
export function randomArrangement(rules: SearchRules, steps: RuleSteps, random: Random): Arrangement {
  const arrangement = emptyArrangement(steps.trials);
  drawOrder(rules, steps.trials, random, arrangement.order);
  drawGaps(steps, random, arrangement);
  placeBetween(arrangement, steps, 0, steps.trials - 1);
  return arrangement;
}

function drawOrder(rules: SearchRules, trials: number, random: Random, order: Int32Array): void {
  const left = Array.from(rules.counts);
  const limit = rules.maxInARow;
  let run = 0;
  /** Whether the rest can be laid out after a trial of `kind` that is the `inRow`-th in a row. */
  const canGoOn = (rest: number, kind: number, inRow: number): boolean =>
    left.every((n, k) => {
      const others = rest - n;
      return n <= limit * others + (k === kind ? limit - inRow : limit);
    });
  for (let t = 0; t < trials; t++) {
    const last = t > 0 ? order[t - 1]! : -1;
    const rest = trials - t - 1;
    const choices = left.map((n, k) => {
      if (n === 0) return 0;
      const inRow = k === last ? run + 1 : 1;
      if (inRow > limit) return 0;
      left[k] = n - 1;
      const possible = limit === Infinity || canGoOn(rest, k, inRow);
      left[k] = n;
      return possible ? n : 0;
    });
    let pick = random.int(choices.reduce((a, b) => a + b, 0));
    let kind = 0;
    while (pick >= choices[kind]!) pick -= choices[kind++]!;
    run = kind === last ? run + 1 : 1;
    left[kind]!--;
    order[t] = kind;
  }
}

/** Shares out the spare steps of this order among its gaps. */
export function drawGaps(steps: RuleSteps, random: Random, arrangement: Arrangement): void {
  const { order, extra } = arrangement;
  const last = order.length - 1;
  const spare = steps.spare[order[last]!]!;
  const mean = spare / last;
  let sum = 0;
  for (let t = 0; t < last; t++) {
    const room = steps.most[order[t]!]! - steps.least[order[t]!]!;
    extra[t] = mean > 0 ? Math.min(room, Math.round(random.exponential(mean))) : 0;
    sum += extra[t]!;
  }
  extra[last] = 0;
  mendGaps(steps, random, arrangement, spare - sum);
}

/** Adds `missing` steps (or takes away, if negative) at random gaps within their bounds, one at a time. */
export function mendGaps(steps: RuleSteps, random: Random, arrangement: Arrangement, missing: number): void {
  const { order, extra } = arrangement;
  const last = order.length - 1;
  const unit = missing > 0 ? 1 : -1;
  let open: number[] = [];
  while (missing !== 0) {
    if (open.length === 0)
      for (let t = 0; t < last; t++) {
        const room = steps.most[order[t]!]! - steps.least[order[t]!]!;
        if (unit > 0 ? extra[t]! < room : extra[t]! > 0) open.push(t);
      }
    if (open.length === 0) throw new Error('Gaps cannot be mended: the rules were not checked.');
    random.shuffle(open);
    const now = open.slice(0, Math.abs(missing));
    for (const t of now) extra[t]! += unit;
    missing -= unit * now.length;
    open = [];
  }
}
