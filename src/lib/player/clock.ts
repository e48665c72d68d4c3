/**
 * The page clock in seconds. In a browser it is `performance.now()`, on which key events and animation frames are
 * stamped too; tests and fast rehearsals hand in a virtual one.
 */
export interface Clock {
  /** Seconds on the page clock; never goes back. */
  now(): number;
}

/** A clock that stands still until it is moved. */
export class VirtualClock implements Clock {
  #now: number;
  constructor(start = 0) {
    this.#now = start;
  }
  now(): number {
    return this.#now;
  }
  /** Moves on to `time`, seconds; an earlier time leaves the clock where it is. */
  moveTo(time: number): void {
    if (time > this.#now) this.#now = time;
  }
}

/** Microsecond rounding for logged times: below the step of any browser clock, without tails of binary digits. */
export const roundMicro = (seconds: number): number => Math.round(seconds * 1e6) / 1e6;
