/**
 * A straight line through the pulses so far: page time against position in volumes (0 = first stored volume).
 * Least squares by running sums about the first pulse, so that one more pulse costs nothing.
 *
 * The slope is drawn towards the planned TR as far as few or jittery pulses leave it open (ridge, that is a normal
 * prior): two quartz clocks seldom differ by more than some 100 ppm, while ten pulses with 10 ms of jitter alone would
 * give a slope wrong by thousands. With hundreds of good pulses the prior weighs nothing.
 */
const FEWEST_FOR_SLOPE = 4;
/** Standard deviation of the prior of scanner against computer clock, parts of the TR. */
const CLOCKS_DIFFER = 200e-6;
/** Jitter that is always reckoned with, seconds: browsers stamp events to a tenth of a millisecond. */
const LEAST_JITTER = 0.0002;

export class PulseLine {
  #n = 0;
  #x0 = 0;
  #t0 = 0;
  #sx = 0;
  #sxx = 0;
  /** Of e, the deviation from the planned TR. */
  #se = 0;
  #sxe = 0;
  #see = 0;
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
    const e = time - this.#t0 - this.tr * x;
    this.#n += 1;
    this.#sx += x;
    this.#sxx += x * x;
    this.#se += e;
    this.#sxe += x * e;
    this.#see += e * e;
  }

  /** Seconds per volume as the pulses alone say (ordinary least squares); the planned TR below four pulses. */
  get measured(): number {
    const spread = this.#spread;
    return spread > 0 ? this.tr + this.#covary / spread : this.tr;
  }

  /** Seconds per volume to reckon with. */
  get slope(): number {
    const spread = this.#spread;
    if (spread <= 0) return this.tr;
    const covary = this.#covary;
    const around = this.#see - (this.#se * this.#se) / this.#n - (covary * covary) / spread;
    const jitter = Math.max(LEAST_JITTER ** 2, around / (this.#n - 2));
    return this.tr + covary / (spread + jitter / (CLOCKS_DIFFER * this.tr) ** 2);
  }

  get #spread(): number {
    return this.#n < FEWEST_FOR_SLOPE ? 0 : this.#sxx - (this.#sx * this.#sx) / this.#n;
  }
  get #covary(): number {
    return this.#sxe - (this.#sx * this.#se) / this.#n;
  }

  /** Page time, seconds, at which `position` volumes is or was reached; NaN before the first pulse. */
  timeAt(position: number): number {
    if (this.#n === 0) return NaN;
    const slope = this.slope;
    const intercept = (this.#se - (slope - this.tr) * this.#sx) / this.#n;
    return this.#t0 + intercept + slope * (position - this.#x0);
  }

  /** Position in volumes at page time `time`. */
  positionAt(time: number): number {
    return (time - this.timeAt(0)) / this.slope;
  }
}
