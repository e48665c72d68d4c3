import type { Random } from '../random';
import { emptyArrangement, mendGaps, placeBetween, type Arrangement } from './arrangement';
import type { RuleSteps, SearchRules } from './rules';

/**
 * Small changes of a candidate that keep every rule: a proposal that would break one is not made.
 *
 * After `propose` returned true, `next` holds the changed candidate between trials `low` and `high`, and equals the
 * present one everywhere else.
 */
export class Moves {
  readonly next: Arrangement;
  low = 0;
  high = 0;
  private readonly last: number;
  private readonly room: Int32Array;

  constructor(
    private readonly rules: SearchRules,
    private readonly steps: RuleSteps,
    private readonly random: Random,
    /** The present candidate; the owner changes it in place. */
    private readonly present: Arrangement
  ) {
    this.next = emptyArrangement(steps.trials);
    this.last = steps.trials - 1;
    this.room = Int32Array.from(steps.most, (most, k) => most - steps.least[k]!);
  }

  /**
   * Shares of the kinds of move: found by trial on 120 trials of 4 kinds. Moves of many trials cost ten times as much
   * as small ones and are worth it: they build the blocks that small moves cannot.
   */
  propose(): boolean {
    const pick = this.random.next();
    if (pick < 0.3) return this.swapKinds();
    if (pick < 0.6) return this.shiftTrial();
    if (pick < 0.8) return this.exchangeGaps();
    if (pick < 0.87) return this.reverse();
    return this.rotate();
  }

  /** Two trials of different kinds trade places; where their lengths differ, the trials between them move along. */
  private swapKinds(): boolean {
    const { order, extra } = this.present;
    const i = this.random.int(this.last + 1);
    const j = this.random.int(this.last + 1);
    const a = order[i]!;
    const b = order[j]!;
    if (a === b) return false;
    const { next } = this;
    this.span(Math.min(i, j), Math.max(i, j));
    next.order[i] = b;
    next.order[j] = a;
    if (!this.keepsRuns(i, i) || !this.keepsRuns(j, j)) return this.undo();
    const { least, spare } = this.steps;
    if (least[a] === least[b] && (this.high < this.last || spare[a] === spare[b]))
      return (extra[i]! <= this.room[b]! && extra[j]! <= this.room[a]!) || this.undo();
    return this.keepsPlaces(i, j, a, b) || this.finish();
  }

  /**
   * Trials of different lengths may also trade places without moving any other, where the gaps after them can take up
   * the difference: far cheaper to score, so tried first, but not always, or some orders could never be reached.
   */
  private keepsPlaces(i: number, j: number, a: number, b: number): boolean {
    if (this.high === this.last || this.random.next() < 0.2) return false;
    const { extra } = this.present;
    const by = this.steps.least[a]! - this.steps.least[b]!;
    const afterI = extra[i]! + by;
    const afterJ = extra[j]! - by;
    if (afterI < 0 || afterI > this.room[b]! || afterJ < 0 || afterJ > this.room[a]!) return false;
    this.next.extra[i] = afterI;
    this.next.extra[j] = afterJ;
    return true;
  }

  /** One trial moves within the two gaps beside it. */
  private shiftTrial(): boolean {
    if (this.last < 2) return false;
    const { order, extra, places } = this.present;
    const i = 1 + this.random.int(this.last - 1);
    const before = extra[i - 1]!;
    const after = extra[i]!;
    const lowest = -Math.min(before, this.room[order[i]!]! - after);
    const highest = Math.min(after, this.room[order[i - 1]!]! - before);
    if (highest === lowest) return false;
    // Any of the allowed places but the present one.
    let by = lowest + this.random.int(highest - lowest);
    if (by >= 0) by++;
    this.span(i - 1, i);
    this.next.extra[i - 1] = before + by;
    this.next.extra[i] = after - by;
    this.next.places[i] = places[i]! + by;
    return true;
  }

  /** Time goes from one gap to another, the trials between them move along. */
  private exchangeGaps(): boolean {
    const { order, extra } = this.present;
    if (this.last < 2) return false;
    const i = this.random.int(this.last);
    const j = this.random.int(this.last);
    const most = Math.min(extra[i]!, this.room[order[j]!]! - extra[j]!);
    if (i === j || most <= 0) return false;
    const by = 1 + this.random.int(most);
    this.span(Math.min(i, j), Math.max(i, j));
    this.next.extra[i]! -= by;
    this.next.extra[j]! += by;
    return this.finish();
  }

  /** A stretch of trials is turned round. */
  private reverse(): boolean {
    const { low, high } = this.stretch();
    const { order, extra } = this.present;
    this.span(low, high);
    for (let t = low; t <= high; t++) {
      this.next.order[t] = order[low + high - t]!;
      if (high < this.last) this.next.extra[t] = extra[low + high - t]!;
    }
    return this.finish();
  }

  /** A stretch of trials is cut in two and the halves trade places. */
  private rotate(): boolean {
    const { low, high } = this.stretch();
    const { order, extra } = this.present;
    const length = high - low + 1;
    const cut = 1 + this.random.int(length - 1);
    this.span(low, high);
    for (let t = 0; t < length; t++) {
      const from = low + ((t + cut) % length);
      this.next.order[low + t] = order[from]!;
      if (high < this.last) this.next.extra[low + t] = extra[from]!;
    }
    return this.finish();
  }

  private stretch(): { low: number; high: number } {
    const length = 2 + this.random.int(Math.min(this.last, 30));
    const low = this.random.int(Math.max(1, this.last + 2 - length));
    return { low, high: Math.min(this.last, low + length - 1) };
  }

  /** Copies the present candidate between two trials to `next`. */
  private span(low: number, high: number): void {
    this.low = low;
    this.high = high;
    const { present, next } = this;
    for (let t = low; t <= high; t++) {
      next.order[t] = present.order[t]!;
      next.extra[t] = present.extra[t]!;
      next.places[t] = present.places[t]!;
    }
  }

  /** Makes `next` equal to the present candidate again; false, as the answer of a refused proposal. */
  private undo(): false {
    this.span(this.low, this.high);
    return false;
  }

  /** Checks the rules on the changed span and works out its onsets. */
  private finish(): boolean {
    const { next, present, steps } = this;
    if (!this.keepsRuns(this.low, this.high)) return this.undo();
    const end = Math.min(this.high, this.last - 1);
    for (let t = this.low; t <= end; t++) if (next.extra[t]! > this.room[next.order[t]!]!) return this.undo();
    if (this.high === this.last) {
      // The last trial has no gap after it, so another kind there changes what is to be shared out among the gaps;
      // with lengths that are multiples of the grid the two always cancel.
      const missing = steps.spare[next.order[this.last]!]! - steps.spare[present.order[this.last]!]!;
      if (missing !== 0) {
        this.low = 0;
        if (!this.canMend(missing)) return this.undo();
        mendGaps(steps, this.random, next, missing);
      }
    }
    placeBetween(next, steps, this.low, this.high);
    return true;
  }

  private canMend(missing: number): boolean {
    let possible = 0;
    for (let t = 0; t < this.last; t++)
      possible += missing > 0 ? this.room[this.next.order[t]!]! - this.next.extra[t]! : this.next.extra[t]!;
    return possible >= Math.abs(missing);
  }

  /** Whether no run of one kind that touches trials low … high is longer than allowed. */
  private keepsRuns(low: number, high: number): boolean {
    const limit = this.rules.maxInARow;
    if (limit > this.last) return true;
    let t = low;
    while (t > 0 && this.next.order[t - 1] === this.next.order[low] && low - t <= limit) t--;
    let run = 0;
    let kind = -1;
    for (; t <= this.last; t++) {
      const here = this.next.order[t]!;
      if (here !== kind && t > high) return true;
      run = here === kind ? run + 1 : 1;
      kind = here;
      if (run > limit) return false;
    }
    return true;
  }
}
