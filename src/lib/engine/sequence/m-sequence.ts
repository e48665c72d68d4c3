import { EngineError, requireWhole } from '../errors';
import { finiteField, type FiniteField } from './field';

export interface MSequence {
  /** One period, q^n − 1 entries of 0 … q − 1. */
  readonly sequence: number[];
  /** c₁ … c_n of s_t = c₁ s_{t−1} + … + c_n s_{t−n}. */
  readonly coefficients: number[];
}

/** Longest period the engine makes; beyond it the exhaustive search would take too long. */
const MAX_PERIOD = 20_000;

/**
 * The m-sequence of order n over GF(q): the longest recursion of n terms, period q^n − 1, in which every window of n
 * entries but the all-zero one occurs once.
 *
 * Of all recursions with full period (each belongs to a primitive polynomial) the `variant`-th in lexicographic order
 * of c₁ … c_n is taken, started at 0 … 0 1; found by running them, in the arithmetic of the field.
 * Kinds may be given to symbols at will; 0 is often the null event. For q > 2 a shift by (q^n − 1)/(q − 1) multiplies
 * the sequence by a constant, so an FIR window must be shorter than that.
 *
 * Domain: q in {2, 3, 4, 5, 7}, n ≥ 2, q^n ≤ 20,001. Errors: `EngineError` outside it, or if there is no such variant.
 * Source: Buracas GT, Boynton GM (2002) NeuroImage 16:801–813; recursions from the reference set, all reproduced.
 * @example mSequence(2, 3).sequence // [0, 0, 1, 0, 1, 1, 1]
 */
export function mSequence(q: number, n: number, variant = 0): MSequence {
  const field = finiteField(q);
  requireWhole('order of the m-sequence', n, 2, 'Use an order of 2 or more.');
  requireWhole('variant of the m-sequence', variant, 0, 'Use 0 for the first.');
  if (q ** n - 1 > MAX_PERIOD)
    throw new EngineError(
      'length of the m-sequence',
      q ** n - 1,
      `at most ${MAX_PERIOD}`,
      'Use a lower order.'
    );
  let left = variant;
  for (const coefficients of fullPeriodRecursions(field, n)) {
    if (left === 0) return { coefficients, sequence: run(field, coefficients) };
    left--;
  }
  throw new EngineError(
    'variant of the m-sequence',
    variant,
    `a number below ${variant - left}, the count of full-period recursions`,
    'Use a smaller number.'
  );
}

/** Every full-period recursion of n terms, lexicographic in c₁ … c_n. */
export function* fullPeriodRecursions(field: FiniteField, n: number): Generator<number[]> {
  const total = field.size ** n;
  for (let code = 0; code < total; code++) {
    const coefficients = digits(code, field.size, n);
    // c_n = 0 would leave the oldest entry out: a recursion of fewer terms.
    if (coefficients[n - 1] !== 0 && periodOf(field, coefficients) === total - 1) yield coefficients;
  }
}

function digits(code: number, base: number, length: number): number[] {
  const out = new Array<number>(length);
  for (let i = length - 1; i >= 0; i--) {
    out[i] = code % base;
    code = (code - out[i]!) / base;
  }
  return out;
}

/** Steps until the state 0 … 0 1 comes back; with c_n ≠ 0 it always does. */
function periodOf(field: FiniteField, coefficients: readonly number[]): number {
  const n = coefficients.length;
  const state = new Array<number>(n).fill(0);
  state[n - 1] = 1;
  for (let steps = 1; ; steps++) {
    step(field, coefficients, state);
    if (state[n - 1] === 1 && state.every((value, i) => i === n - 1 || value === 0)) return steps;
  }
}

/** state = s_{t−n} … s_{t−1} becomes s_{t−n+1} … s_t. */
function step(field: FiniteField, coefficients: readonly number[], state: number[]): void {
  const n = coefficients.length;
  let next = 0;
  for (let i = 0; i < n; i++) next = field.add(next, field.multiply(coefficients[i]!, state[n - 1 - i]!));
  state.shift();
  state.push(next);
}

function run(field: FiniteField, coefficients: readonly number[]): number[] {
  const n = coefficients.length;
  const state = new Array<number>(n).fill(0);
  state[n - 1] = 1;
  return Array.from({ length: field.size ** n - 1 }, () => {
    const first = state[0]!;
    step(field, coefficients, state);
    return first;
  });
}
