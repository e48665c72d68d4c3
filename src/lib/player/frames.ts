/**
 * The frame interval as the screen really has it: a running median, so that one late frame does not move it and a
 * change of refresh rate does, within a few frames. No memory is taken per frame.
 */
const KEPT = 15;

export class FrameMeter {
  readonly #recent = new Float64Array(KEPT);
  readonly #sorted = new Float64Array(KEPT);
  #count = 0;
  #last = NaN;
  #interval: number;

  /** `expected`: interval to begin with, seconds. */
  constructor(expected: number) {
    this.#interval = expected;
  }

  /** Seconds between frames. */
  get interval(): number {
    return this.#interval;
  }

  /**
   * Takes the timestamp of a frame, seconds. Answers how many frames were left out before it; 0 also for the first
   * frame of all.
   */
  frame(time: number): number {
    const passed = time - this.#last;
    this.#last = time;
    if (!(passed > 0)) return 0;
    const dropped = Math.max(0, Math.round(passed / this.#interval) - 1);
    this.#recent[this.#count % KEPT] = passed;
    this.#count += 1;
    if (this.#count >= KEPT) {
      this.#sorted.set(this.#recent);
      this.#sorted.sort();
      this.#interval = this.#sorted[KEPT >> 1]!;
    }
    return dropped;
  }

  /** Forgets the last frame, so that a pause on purpose is not taken for dropped frames. */
  pause(): void {
    this.#last = NaN;
  }
}

/**
 * Nearest frame rule: whether something planned for `due` belongs into the frame shown at `shown` (or an earlier
 * one) and not into the next. All on one clock, seconds.
 */
export const isDue = (due: number, shown: number, interval: number): boolean => due <= shown + interval / 2;
