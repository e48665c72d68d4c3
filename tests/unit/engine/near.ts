import { expect } from 'vitest';

/** The engine's tolerance: 1e-9 of the expected value (or of `scale`, where the expected value is near 0). */
export const RELATIVE = 1e-9;

/** Expects `value` within `tolerance` of `expected`, relative to the larger of |expected| and `scale`. */
export function expectNear(value: number, expected: number, scale = 0, tolerance = RELATIVE): void {
  const allowed = tolerance * Math.max(Math.abs(expected), scale);
  expect(Math.abs(value - expected), `${value} against ${expected}`).toBeLessThanOrEqual(allowed);
}

/** The same for lists of numbers; `scale` defaults to the largest expected value. */
export function expectAllNear(
  values: ArrayLike<number>,
  expected: ArrayLike<number>,
  scale = Math.max(...Array.from(expected, Math.abs)),
  tolerance = RELATIVE
): void {
  expect(values.length).toBe(expected.length);
  for (let i = 0; i < expected.length; i += 1) expectNear(values[i]!, expected[i]!, scale, tolerance);
}
