import { EngineError } from '../errors';

/** A finite field GF(q), elements coded 0 … q − 1. */
export interface FiniteField {
  readonly size: number;
  add(a: number, b: number): number;
  multiply(a: number, b: number): number;
}

/** Sizes the engine knows. */
export const FIELD_SIZES = [2, 3, 4, 5, 7] as const;

/** GF(4) = {0, 1, a, a + 1} coded 0, 1, 2, 3 with a² = a + 1; row · column. */
const GF4_PRODUCTS = [
  [0, 0, 0, 0],
  [0, 1, 2, 3],
  [0, 2, 3, 1],
  [0, 3, 1, 2]
];

/**
 * GF(q) for q = 2, 3, 5, 7 (whole numbers modulo q) and 4 (polynomials over GF(2) modulo x² + x + 1).
 * Errors: `EngineError` for another q.
 */
export function finiteField(q: number): FiniteField {
  if (!FIELD_SIZES.some((size) => size === q))
    throw new EngineError(
      'size of the field',
      q,
      '2, 3, 4, 5 or 7',
      'Count trial kinds and null events together.'
    );
  if (q === 4) return { size: 4, add: (a, b) => a ^ b, multiply: (a, b) => GF4_PRODUCTS[a]![b]! };
  return { size: q, add: (a, b) => (a + b) % q, multiply: (a, b) => (a * b) % q };
}
