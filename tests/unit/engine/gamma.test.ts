import { describe, expect, it } from 'vitest';
import { EngineError } from '$lib/engine/errors';
import { digamma, gammaDensity, logGamma, regularisedGamma, wholePower } from '$lib/engine/response/gamma';
import reference from '../../fixtures/reference/gamma.json';
import { expectNear } from './near';

describe('gamma function and relatives (mpmath, 30 digits)', () => {
  it('ln Γ', () => {
    // Small arguments are shifted past 16, where terms of about 30 cancel: a few 1e-15 are left.
    for (const [x, value] of reference.log_gamma) expectNear(logGamma(Number(x)), Number(value), 1, 1e-14);
  });

  it('ψ', () => {
    for (const [x, value] of reference.digamma) expectNear(digamma(Number(x)), Number(value), 1, 2e-15);
  });

  it('P(a, x), whole and real shapes, far into the lower tail', () => {
    for (const [a, x, value] of reference.regularised)
      expectNear(regularisedGamma(Number(a), Number(x)), Number(value), 0, 2e-13);
  });

  it('density', () => {
    for (const [a, b, t, value] of reference.density)
      expectNear(gammaDensity(Number(a), Number(b)).density(Number(t)), Number(value), 0, 2e-13);
  });

  it('slope is the derivative and cumulative the integral of the density', () => {
    for (const shape of [1, 2, 6, 6.4, 16]) {
      const g = gammaDensity(shape, 0.9);
      for (const t of [0.5, 3, 7, 14]) {
        const step = 1e-4;
        expectNear((g.density(t + step) - g.density(t - step)) / (2 * step), g.slope(t), 1, 1e-8);
        expectNear((g.cumulative(t + step) - g.cumulative(t - step)) / (2 * step), g.density(t), 1, 1e-8);
      }
      expect(g.cumulative(Infinity)).toBe(1);
      expect(g.density(-1)).toBe(0);
      expect(g.cumulative(-1)).toBe(0);
    }
  });

  it('whole powers, and the edges of the domain', () => {
    expect(wholePower(3, 0)).toBe(1);
    expect(wholePower(3, 13)).toBe(1594323);
    expect(() => gammaDensity(0.5, 1)).toThrow(/gamma shape is 0.5; expected a number of at least 1/);
    expect(() => gammaDensity(6, 0)).toThrow(EngineError);
    expect(() => logGamma(0)).toThrow(EngineError);
  });
});
