import { exponentOf, scaleByPowerOfTwo } from './bits';
import { add, divide, multiply, twoProduct, twoSum, type DoubleDouble } from './double-double';

/** ln 2 in two parts: the first has 40 bits, so e · LN2_HIGH is exact for every binary exponent e. */
const LN2_HIGH = 0.6931471805592082;
const LN2_LOW = 7.371002565167799e-13;
/** ln 2 as a double-double. */
const LN2: DoubleDouble = { hi: 0.6931471805599453, lo: 2.3190468138462996e-17 };
const ROOT_HALF = 0.7071067811865476;

/** x = m · 2^e with √½ ≤ m < √2. Domain: finite x > 0. */
function split(x: number): { m: number; e: number } {
  const e = exponentOf(x);
  const m = scaleByPowerOfTwo(x, -e);
  return m >= 2 * ROOT_HALF ? { m: m / 2, e: e + 1 } : { m, e };
}

/**
 * Natural logarithm.
 *
 * Method: x = m · 2^e; with f = m − 1 and s = f / (2 + f), ln m = 2 artanh s = f − f²/2 + s (f²/2 + R), where
 * R = 2 (s²/3 + s⁴/5 + …) to s^22 (|s| ≤ 0.1716, remainder < 2^−60 of s). Error below 1 unit in the last place.
 * ln 0 = −∞, ln of a negative number is NaN.
 */
export function log(x: number): number {
  if (x === 0) return -Infinity;
  if (!(x > 0) || x === Infinity) return x > 0 ? x : NaN;
  const { m, e } = split(x);
  const f = m - 1;
  const s = f / (2 + f);
  const z = s * s;
  let series = 0;
  for (let n = 23; n >= 3; n -= 2) series = z * (2 / n + series);
  const half = 0.5 * f * f;
  return e * LN2_HIGH - (half - (s * (half + series) + e * LN2_LOW) - f);
}

/** ln(1 + x) without loss near 0; error below 2 units in the last place. Domain: x ≥ −1. */
export function log1p(x: number): number {
  const u = 1 + x;
  if (u === 1) return x;
  if (!(u > 0) || u === Infinity) return log(u);
  // The rounding of 1 + x is known exactly; its effect on the logarithm is rounding / u to first order.
  return log(u) + twoSum(1, x).lo / u;
}

/** 1/(2n + 1) as double-doubles, n = 0…16. */
const ODD_INVERSES = Array.from({ length: 17 }, (_, n) => divide({ hi: 1, lo: 0 }, { hi: 2 * n + 1, lo: 0 }));

/**
 * ln x as a double-double, relative error below 2^−90: what `pow` needs, because it multiplies the logarithm by
 * numbers up to 1074. Domain: finite x > 0.
 */
export function logDoubleDouble(x: number): DoubleDouble {
  const { m, e } = split(x);
  const f = m - 1; // exact: m is within a factor 2 of 1
  const s = divide({ hi: f, lo: 0 }, twoSum(2, f));
  const z = multiply(s, s);
  let series = ODD_INVERSES[16]!;
  for (let n = 15; n >= 0; n--) series = add(ODD_INVERSES[n]!, multiply(z, series));
  const logM = multiply({ hi: 2 * s.hi, lo: 2 * s.lo }, series);
  if (e === 0) return logM;
  const product = twoProduct(e, LN2.hi);
  return add({ hi: product.hi, lo: product.lo + e * LN2.lo }, logM);
}
