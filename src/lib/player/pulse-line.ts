/**
 * A straight line through the pulses so far: page time against position in volumes (0 = first stored volume).
 * Ordinary least squares by running sums about the first pulse, so that one more pulse costs nothing.
 */
const FEWEST_FOR_SLOPE = 4;

export class PulseLine {
  #n = 0;
  #x0 = 0;
  #t0 = 0;
  #sx = 0;
  #sxx = 0;
  #st = 0;
  #sxt = 0;
  readonly tr: number;

  /** `tr`: planned TR, seconds; it is the slope until there are four pulses. */
  constructor(tr: number) {
    this.tr = tr;
  }

  get count(): number {
    return this.#n;
  }

  /** Takes in a pulse at `position` volumes and page time `time`, seconds. */
  add(position: number, time: number): void {
    if (this.#n === 0) {
      this.#x0 = position;
      this.#t0 = time;
    }
    const x = position - this.#x0;
    const t = time - this.#t0;
    this.#n += 1;
    this.#sx += x;
    this.#sxx += x * x;
    this.#st += t;
    this.#sxt += x * t;
  }

  /** Seconds per volume: fitted from four pulses on, else the planned TR. */
  get slope(): number {
    const spread = this.#n * this.#sxx - this.#sx * this.#sx;
    if (this.#n < FEWEST_FOR_SLOPE || spread <= 0) return this.tr;
    return (this.#n * this.#sxt - this.#sx * this.#st) / spread;
  }

  /** Page time, seconds, at which `position` volumes is or was reached; NaN before the first pulse. */
  timeAt(position: number): number {
    if (this.#n === 0) return NaN;
    const slope = this.slope;
    const intercept = (this.#st - slope * this.#sx) / this.#n;
    return this.#t0 + intercept + slope * (position - this.#x0);
  }

  /** Position in volumes at page time `time`. */
  positionAt(time: number): number {
    return (time - this.timeAt(0)) / this.slope;
  }
}
