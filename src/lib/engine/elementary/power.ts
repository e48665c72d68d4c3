import { expOfSum } from './exponential';
import { twoProduct, twoSum } from './double-double';
import { logDoubleDouble } from './logarithm';

/**
 * x^y for doubles, with the special cases of ECMAScript's `**` (so 1^NaN and (−1)^±∞ are NaN, x^0 is 1).
 *
 * Method: e^(y ln |x|) with the logarithm and the product carried as double-doubles, so that the error stays
 * below 1 unit in the last place and every exactly representable power (2^k, 3^5, 1.5^4) is exact.
 * A negative base needs a whole exponent; else NaN.
 */
export function pow(x: number, y: number): number {
  if (y === 0) return 1;
  if (x !== x || y !== y) return NaN;
  const size = Math.abs(x);
  if (y === Infinity || y === -Infinity) {
    if (size === 1) return NaN;
    return size > 1 === y > 0 ? Infinity : 0;
  }
  const isWhole = Number.isInteger(y);
  const isOdd = isWhole && Math.abs(y % 2) === 1;
  const isNegative = x < 0 || Object.is(x, -0);
  if (x < 0 && size !== Infinity && !isWhole) return NaN;
  const sign = isNegative && isOdd ? -1 : 1;
  if (size === 0) return y > 0 ? sign * 0 : sign * Infinity;
  if (size === Infinity) return y > 0 ? sign * Infinity : sign * 0;
  if (size === 1) return sign;
  return sign * power(size, y);
}

/** x^y for finite x > 0, x ≠ 1, finite y ≠ 0. */
function power(x: number, y: number): number {
  const l = logDoubleDouble(x);
  const estimate = y * l.hi;
  if (estimate > 710) return Infinity;
  if (estimate < -746) return 0;
  // Veltkamp's split would overflow for a vast y; then |ln x| is tiny, y is beyond 2^53 and needs no halves.
  if (Math.abs(y) > 1e290) return expOfSum(estimate, y * l.lo);
  const p = twoProduct(y, l.hi);
  const sum = twoSum(p.hi, p.lo + y * l.lo);
  return expOfSum(sum.hi, sum.lo);
}
