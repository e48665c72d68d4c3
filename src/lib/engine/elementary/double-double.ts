/**
 * Numbers carried as an unevaluated sum hi + lo of two doubles, |lo| ≤ ulp(hi)/2: about 106 bits.
 *
 * Only + − × ÷ of IEEE 754 doubles, so the same on every machine.
 * Source: Dekker TJ (1971) A floating-point technique for extending the available precision. Numer Math
 * 18:224–242; Knuth DE, The Art of Computer Programming, vol. 2, §4.2.2 (both from memory).
 */
export interface DoubleDouble {
  readonly hi: number;
  readonly lo: number;
}

/** Exact a + b. Domain: no overflow. */
export function twoSum(a: number, b: number): DoubleDouble {
  const hi = a + b;
  const t = hi - a;
  return { hi, lo: a - (hi - t) + (b - t) };
}

/** Exact a · b by Veltkamp's splitting. Domain: |a|, |b| < 2^996, and the product not below 2^−969. */
export function twoProduct(a: number, b: number): DoubleDouble {
  const hi = a * b;
  const ta = 134217729 * a; // 2^27 + 1
  const ah = ta - (ta - a);
  const al = a - ah;
  const tb = 134217729 * b;
  const bh = tb - (tb - b);
  const bl = b - bh;
  return { hi, lo: ah * bh - hi + ah * bl + al * bh + al * bl };
}

export function add(x: DoubleDouble, y: DoubleDouble): DoubleDouble {
  const s = twoSum(x.hi, y.hi);
  const t = twoSum(x.lo, y.lo);
  const u = twoSum(s.hi, s.lo + t.hi);
  return twoSum(u.hi, u.lo + t.lo);
}

export function multiply(x: DoubleDouble, y: DoubleDouble): DoubleDouble {
  const p = twoProduct(x.hi, y.hi);
  return twoSum(p.hi, p.lo + (x.hi * y.lo + x.lo * y.hi));
}

/** x / y, relative error near 2^−104. Domain: y ≠ 0. */
export function divide(x: DoubleDouble, y: DoubleDouble): DoubleDouble {
  const q = x.hi / y.hi;
  const p = twoProduct(q, y.hi);
  const rest = x.hi - p.hi - p.lo + x.lo - q * y.lo;
  return twoSum(q, rest / y.hi);
}
