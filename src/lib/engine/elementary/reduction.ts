import { exponentOf, powerOfTwo, scaleByPowerOfTwo } from './bits';
import { twoSum } from './double-double';

/** An angle folded to |high + low| ≤ π/4 (a hair more by rounding), and the number of quarter turns taken, 0…3. */
export interface Folded {
  readonly quarter: number;
  readonly high: number;
  readonly low: number;
}

/** π/2 in three parts of 33, 33 and 53 bits: products of the first two with n < 2^20 are exact. */
const HALF_PI_1 = 1.5707963267341256;
const HALF_PI_2 = 6.077100506303966e-11;
const HALF_PI_3 = 2.0222662487959506e-21;
const INVERSE_HALF_PI = 0.6366197723675814;

/** Bits after the point in the exact fold: the largest double has 1024 before it, the rest is what is left over. */
const PLACES = 1300;

let halfPi: bigint | undefined;

/** floor(π/2 · 2^PLACES) by Machin's formula π/4 = 4 artan(1/5) − artan(1/239), in whole numbers. */
function wholeHalfPi(): bigint {
  if (halfPi !== undefined) return halfPi;
  const guard = 32n;
  const one = 1n << (BigInt(PLACES) + guard);
  const inverseTangent = (n: bigint): bigint => {
    let term = one / n;
    let sum = term;
    for (let k = 3n, sign = -1n; term !== 0n; k += 2n, sign = -sign) {
      term /= n * n;
      sum += (sign * term) / k;
    }
    return sum;
  };
  halfPi = (2n * (4n * inverseTangent(5n) - inverseTangent(239n))) >> guard;
  return halfPi;
}

/** The fold in whole numbers: exact to 2^−270 for every finite double. */
function foldExactly(x: number): Folded {
  const half = wholeHalfPi();
  const e = exponentOf(x) - 52;
  const whole = BigInt(scaleByPowerOfTwo(x, -e));
  const shift = BigInt(PLACES + e);
  const scaled = shift >= 0n ? whole << shift : whole >> -shift;
  let n = (2n * scaled + half) / (2n * half);
  let rest = scaled - n * half;
  if (2n * rest < -half) {
    n -= 1n;
    rest += half;
  }
  const short = rest >> BigInt(PLACES - 400); // 400 bits after the point still fit a double's exponent range
  const high = Number(short);
  const low = Number(short - BigInt(high));
  const unit = powerOfTwo(-400);
  return { quarter: Number(((n % 4n) + 4n) % 4n), high: high * unit, low: low * unit };
}

/**
 * Folds an angle in radians to the nearest multiple of π/2. Domain: any finite x.
 *
 * Up to |x| < 10^6 by subtracting three parts of π/2 (Cody WJ, Waite W (1980) Software Manual for the Elementary
 * Functions; from memory); beyond that, or where x is so near a multiple that the parts would lose bits, in exact
 * whole-number arithmetic.
 */
export function fold(x: number): Folded {
  const size = Math.abs(x);
  if (size <= 0.7853981633974483) return { quarter: 0, high: x, low: 0 };
  if (size >= 1e6) return foldExactly(x);
  const n = Math.round(x * INVERSE_HALF_PI);
  const a = twoSum(x - n * HALF_PI_1, -n * HALF_PI_2);
  const b = twoSum(a.hi, a.lo - n * HALF_PI_3);
  if (Math.abs(b.hi) < 1e-6) return foldExactly(x);
  return { quarter: ((n % 4) + 4) % 4, high: b.hi, low: b.lo };
}
