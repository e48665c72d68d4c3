import { describe, expect, it, vi } from 'vitest';
import { regularisedBeta } from '$lib/engine/distribution/beta';
import { fisherTail } from '$lib/engine/distribution/fisher';
import { noncentralDensity, noncentralTail } from '$lib/engine/distribution/noncentral-t';
import { normalDensity, normalTail } from '$lib/engine/distribution/normal';
import {
  studentCritical,
  studentDensity,
  studentTail,
  studentTwoSided
} from '$lib/engine/distribution/student';
import { EngineError } from '$lib/engine/errors';
import { expectNear } from './near';
import reference from '../../fixtures/reference/distribution.json';

// Seconds of arithmetic, more on a machine that does other things as well.
vi.setConfig({ testTimeout: 60_000 });

describe('tails against 30-digit values (mpmath)', () => {
  it('normal', () => {
    for (const [x, p] of reference.normal) expectNear(normalTail(x!), p!, 0, 1e-13);
  });
  it('Student', () => {
    // ln Γ of half the degrees of freedom costs a few digits at df = 1000.
    for (const [t, df, p] of reference.student) expectNear(studentTail(t!, df!), p!, 0, 1e-12);
  });
  it('Fisher', () => {
    for (const [f, a, b, p] of reference.fisher) expectNear(fisherTail(f!, a!, b!), p!, 0, 1e-12);
  });
  it('non-central t, to 1e-12', () => {
    for (const [t, df, delta, p] of reference.noncentral) {
      expect(Math.abs(noncentralTail(t!, df!, delta!) - p!)).toBeLessThan(1e-12);
    }
  });
});

describe('identities', () => {
  it('density is the slope of the tail', () => {
    const h = 1e-5;
    const slope = (f: (x: number) => number, x: number) => (f(x - h) - f(x + h)) / (2 * h);
    for (const x of [-3, -0.2, 1, 2.49, 4]) {
      // Central differences: error h² and 1e-16/h.
      expectNear(normalDensity(x), slope(normalTail, x), 0.1, 1e-8);
      for (const df of [2, 17, 191]) {
        expectNear(
          studentDensity(x, df),
          slope((t) => studentTail(t, df), x),
          0.1,
          1e-8
        );
        expectNear(
          noncentralDensity(x, df, 1.3),
          slope((t) => noncentralTail(t, df, 1.3), x),
          0.1,
          1e-8
        );
      }
    }
  });

  it('non-central t without non-centrality is Student’s t, also far out', () => {
    for (const df of [1, 2, 10, 191, 5000])
      for (const t of [-4, -0.1, 0, 1, 5, 20])
        // Relative, so that p values of 1e-50 count too; ln Γ(2500) limits Student's own form.
        expectNear(noncentralTail(t, df, 0), studentTail(t, df), 0, df > 1000 ? 1e-9 : 1e-11);
    expectNear(noncentralDensity(0.7, 5, 0), studentDensity(0.7, 5), 0, 1e-12);
  });

  it('mirror: P(T > t; δ) + P(T > −t; −δ) = 1', () => {
    for (const [t, df, delta] of [
      [1, 4, 2],
      [-3, 30, 1],
      [0, 9, -4]
    ] as const)
      expectNear(noncentralTail(t, df, delta) + noncentralTail(-t, df, -delta), 1, 0, 1e-13);
  });

  it('F with one numerator degree is t², I_x(a,b) + I_{1−x}(b,a) = 1, and the critical value is undone', () => {
    for (const t of [0.3, 2, 6]) expectNear(fisherTail(t * t, 1, 40), studentTwoSided(t, 40), 0, 1e-12);
    expectNear(regularisedBeta(3.5, 7, 0.2) + regularisedBeta(7, 3.5, 0.8), 1, 0, 1e-14);
    expect(regularisedBeta(2, 3, 0.5)).toBeCloseTo(0.6875, 15);
    for (const alpha of [1e-8, 0.001, 0.05, 0.5, 0.975])
      for (const df of [1, 2.3, 24, 191, 3000])
        expectNear(studentTail(studentCritical(alpha, df), df), alpha, 0, 1e-12);
  });

  it('examples of the comments, from tables', () => {
    expectNear(normalTail(1.959963984540054), 0.025, 0, 1e-13);
    expectNear(studentTail(2.2281388519862744, 10), 0.025, 0, 1e-13);
    expectNear(fisherTail(4.102821015303817, 2, 10), 0.05, 0, 1e-9);
    expectNear(noncentralDensity(0, 5, 0), 0.3796066898224944, 0, 1e-13);
  });

  it('reaches the ends of the range', () => {
    expect([normalTail(40), normalTail(-40), studentTail(Infinity, 3), studentTail(-Infinity, 3)]).toEqual([
      0, 1, 0, 1
    ]);
    expect([fisherTail(0, 2, 3), fisherTail(Infinity, 2, 3), studentCritical(0.5, 4)]).toEqual([1, 0, 0]);
    expect(noncentralTail(60, 1, 0)).toBeGreaterThan(0.005);
    expect(noncentralTail(50, 500, 0)).toBeGreaterThanOrEqual(0);
  });

  it('ends, with a probability, for extreme arguments', () => {
    for (const t of [-1e6, 0, 40, 1e6])
      for (const df of [0.3, 7.5, 20_000])
        for (const delta of [-60, 0, 60]) {
          const p = noncentralTail(t, df, delta);
          expect(p >= 0 && p <= 1).toBe(true);
          expect(noncentralDensity(t, df, delta)).toBeGreaterThanOrEqual(0);
        }
    for (const alpha of [1e-100, 1e-15, 1 - 1e-12])
      for (const df of [1, 5, 1e5]) expect(Number.isFinite(studentCritical(alpha, df))).toBe(true);
  }, 30_000);

  it('refuses malformed numbers', () => {
    for (const call of [
      () => studentTail(NaN, 3),
      () => studentTail(1, 0),
      () => studentCritical(0, 3),
      () => studentCritical(1, 3),
      () => studentDensity(Infinity, 3),
      () => fisherTail(NaN, 1, 1),
      () => fisherTail(1, 0, 1),
      () => noncentralTail(NaN, 3, 1),
      () => noncentralTail(1, -3, 1),
      () => noncentralDensity(1, 3, Infinity),
      () => regularisedBeta(1, 1, 2)
    ])
      expect(call).toThrow(EngineError);
  });
});
