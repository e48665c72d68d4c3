import type { Hertz, Seconds } from '../units';

export interface Complex {
  re: number;
  im: number;
}

/**
 * A response shape: what the signal does after one unit impulse at time 0.
 *
 * Everything downstream (regressors, curves, efficiency) needs no more than this. Values are those of the published
 * formula, unscaled; a divisor is stated wherever a scaled one is shown.
 */
export interface Response {
  /** In words, with author and year where it is a published shape. */
  readonly name: string;
  /** End of the support in seconds; `value` is 0 before 0 and after `length`, both ends belong to the support. */
  readonly length: Seconds;
  /** h(t), per second of stimulation. */
  value(t: Seconds): number;
  /** ∫ from 0 to t of h, in closed form (or certified, where the shape has none); constant beyond `length`. */
  integral(t: Seconds): number;
  /** The exact maximum of h (never a grid maximum). */
  readonly peak: { readonly time: Seconds; readonly value: number };
  /** h′(t), where the shape has it in closed form. */
  slope?(t: Seconds): number;
  /** H(f) = ∫ h(t) e^(−2πift) dt, where the shape has it in closed form (see `transferOf`). */
  transfer?(f: Hertz): Complex;
}
