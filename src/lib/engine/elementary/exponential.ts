import { scaleByPowerOfTwo } from './bits';

/** ln 2 in two parts: the first has 40 bits, so k · LN2_HIGH is exact for every binary exponent k. */
const LN2_HIGH = 0.6931471805592082;
const LN2_LOW = 7.371002565167799e-13;
const INVERSE_LN2 = 1.4426950408889634;

/** 1/n! for n = 2…14, Horner's order is from the last. */
const INVERSE_FACTORIALS = (() => {
  const out: number[] = [];
  for (let n = 2, f = 2; n <= 14; n++, f *= n) out.push(1 / f);
  return out;
})();

/** e^(high + low) − 1 − high for |high| ≤ 0.35 and a tiny `low`: the part that is added to 1 + high. */
function tail(high: number, low: number): number {
  let q = INVERSE_FACTORIALS[12]!;
  for (let i = 11; i >= 0; i--) q = INVERSE_FACTORIALS[i]! + high * q;
  // d/dr e^r = e^r carries the low part; 1 + high is enough of it at this size.
  return high * high * q + low * (1 + high);
}

/**
 * e^(x + correction), where `correction` is far below x (the low half of a double-double).
 *
 * Method: x = k ln 2 + r with |r| ≤ ln 2 / 2, Taylor's series of e^r to r^14 (remainder < 2^−64), then exact
 * scaling by 2^k. Error below 1 unit in the last place (measured against 50-digit values: see the tests).
 * Range: overflow gives Infinity above 709.782712893384, underflow is gradual down to 0 below −745.13.
 */
export function expOfSum(x: number, correction: number): number {
  if (x !== x) return x;
  if (x > 709.9) return Infinity;
  if (x < -746) return 0;
  const k = Math.round(x * INVERSE_LN2);
  const high = x - k * LN2_HIGH;
  const low = correction - k * LN2_LOW;
  const r = high + low;
  const rest = high - r + low;
  return scaleByPowerOfTwo(1 + (r + tail(r, rest)), k);
}

/** e^x. Any double; NaN for NaN. See {@link expOfSum} for method and error. */
export function exp(x: number): number {
  return expOfSum(x, 0);
}

/** e^x − 1 without loss near 0; error below 2 units in the last place. */
export function expm1(x: number): number {
  if (x === 0 || x !== x) return x;
  if (x > -0.35 && x < 0.35) return x + tail(x, 0);
  return x < -40 ? -1 : exp(x) - 1;
}
