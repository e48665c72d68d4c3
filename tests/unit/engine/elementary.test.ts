import fc from 'fast-check';
import { describe, expect, it, vi } from 'vitest';
import { cos, exp, expm1, log, log1p, pow, powerOfTwo, scaleByPowerOfTwo, sin } from '$lib/engine/elementary';
import { bitsOf } from '$lib/engine/elementary/bits';
import reference from '../../fixtures/reference/elementary.json';

// A failure here is one that anyone can see again.
fc.configureGlobal({ seed: 20261201 });

// Seconds of arithmetic, more on a machine that does other things as well.
vi.setConfig({ testTimeout: 60_000 });

/** Distance of two doubles of the same sign in units in the last place. */
function ulps(a: number, b: number): number {
  if (Object.is(a, b)) return 0;
  const d = bitsOf(Math.abs(a)) - bitsOf(Math.abs(b));
  return Math.sign(a) === Math.sign(b) ? Number(d < 0n ? -d : d) : Infinity;
}

const unary: [string, (x: number) => number, number[][], number][] = [
  // A faithful function (error below 1 ulp) is at most 1 double away from the correctly rounded value.
  ['exp', exp, reference.exp, 1],
  ['log', log, reference.log, 1],
  ['sin', sin, reference.sin, 1],
  ['cos', cos, reference.cos, 1],
  ['expm1', expm1, reference.expm1, 2],
  ['log1p', log1p, reference.log1p, 2]
];

describe('elementary functions against 1400-bit values (mpmath)', () => {
  it.each(unary)('%s', (_name, f, rows, allowed) => {
    expect(rows.length).toBeGreaterThan(150);
    for (const [x, y] of rows) expect({ x, off: ulps(f(x!), y!) <= allowed }).toEqual({ x, off: true });
  });

  it('pow', () => {
    expect(reference.pow.length).toBeGreaterThan(300);
    for (const [x, y, v] of reference.pow)
      expect({ x, y, ok: ulps(pow(x!, y!), v!) <= 1 }).toEqual({ x, y, ok: true });
  });
});

describe('elementary functions against the language (its own error is a few ulp at most)', () => {
  const near = (a: number, b: number) => Math.abs(a - b) <= 4e-16 * Math.max(Math.abs(a), Math.abs(b));
  const range = (min: number, max: number) => fc.double({ min, max, noNaN: true });
  it('agrees for random arguments', () => {
    fc.assert(fc.property(range(-700, 700), (x) => near(exp(x), Math.exp(x))));
    fc.assert(fc.property(range(1e-300, 1e300), (x) => near(log(x), Math.log(x))));
    fc.assert(fc.property(range(-1e6, 1e6), (x) => near(sin(x), Math.sin(x)) && near(cos(x), Math.cos(x))));
    fc.assert(fc.property(range(0.01, 100), range(-50, 50), (x, y) => near(pow(x, y), x ** y)));
  });
});

describe('exact identities', () => {
  it('powers of two, whole powers and roots are exact', () => {
    for (let k = -1074; k <= 1023; k++) expect(pow(2, k)).toBe(powerOfTwo(k));
    for (let n = 0; n <= 22; n++) expect(pow(10, n)).toBe(Number(`1e${n}`));
    for (const [x, n] of [
      [3, 33],
      [5, 22],
      [7, 18],
      [1.5, 12],
      [-3, 3]
    ] as const) {
      let product = 1;
      for (let i = 0; i < n; i++) product *= x;
      expect(pow(x, n)).toBe(product);
    }
    for (let n = 1; n < 2000; n++) expect(pow(n * n, 0.5)).toBe(n);
  });

  it('x^1 is x, e^0 is 1, ln 1 is 0, even and odd symmetry', () => {
    fc.assert(
      fc.property(fc.double({ min: 5e-324, max: 1.7e308, noNaN: true }), (x) => {
        expect(pow(x, 1)).toBe(x);
        expect(sin(-x)).toBe(-sin(x));
        expect(cos(-x)).toBe(cos(x));
        expect(Math.abs(sin(x) ** 2 + cos(x) ** 2 - 1)).toBeLessThan(5e-16);
      })
    );
    expect([exp(0), log(1), cos(0), sin(0), expm1(0), log1p(0)]).toEqual([1, 0, 1, 0, 0, 0]);
  });

  it('log undoes exp to the rounding of its argument', () => {
    fc.assert(
      fc.property(fc.double({ min: -700, max: 700, noNaN: true }), (x) => {
        expect(Math.abs(log(exp(x)) - x)).toBeLessThan(2.3e-16 * Math.max(1, Math.abs(x)));
      })
    );
  });

  it('meets the edges of the number range', () => {
    expect([exp(710), exp(-746), exp(-Infinity), exp(Infinity)]).toEqual([Infinity, 0, 0, Infinity]);
    expect(exp(-745)).toBe(5e-324);
    expect([log(0), log(-1), log(Infinity), log(NaN)]).toEqual([-Infinity, NaN, Infinity, NaN]);
    expect([sin(Infinity), cos(NaN), exp(NaN), expm1(-50), log1p(-1)]).toEqual([
      NaN,
      NaN,
      NaN,
      -1,
      -Infinity
    ]);
    expect(scaleByPowerOfTwo(1, -1074)).toBe(5e-324);
    expect(scaleByPowerOfTwo(5e-324, 2097)).toBe(powerOfTwo(1023));
  });

  it('pow has the special cases of the language', () => {
    const odd = [
      0,
      -0,
      1,
      -1,
      2,
      -2,
      0.5,
      -0.5,
      3,
      -3,
      1e308,
      5e-324,
      Infinity,
      -Infinity,
      NaN,
      1e300,
      -1e300
    ];
    for (const x of odd)
      for (const y of odd) {
        const got = pow(x, y);
        const want = x ** y;
        expect({ x, y, ok: Object.is(got, want) || ulps(got, want) <= 1 }).toEqual({ x, y, ok: true });
      }
  });
});
