import { EngineError, requirePositive } from '../errors';
import { exp, log } from '../elementary';

/**
 * The gamma function and its relatives, to about 1e-15 relative.
 *
 * Source: DLMF chapters 5 and 8 (recurrences 5.5.1 and 5.5.2, Stirling series 5.11.1 and 5.11.2, incomplete gamma
 * series 8.7.1, finite sum 8.4.10, continued fraction 8.9.2); formulas from memory, values checked in
 * tests/unit/engine/gamma.test.ts against the reference tables.
 */

/** Shapes up to this one are handled by finite products and sums when whole. */
const WHOLE_LIMIT = 64;
const HALF_LOG_TWO_PI = 0.9189385332046727;
/** B₂ₖ / (2k(2k−1)), k = 1…8. */
const STIRLING = [1 / 12, -1 / 360, 1 / 1260, -1 / 1680, 1 / 1188, -691 / 360360, 1 / 156, -3617 / 122400];
/** B₂ₖ / 2k, k = 1…7. */
const DIGAMMA = [1 / 12, -1 / 120, 1 / 252, -1 / 240, 1 / 132, -691 / 32760, 1 / 12];

/** base^power for a whole power ≥ 0, by squaring: the same on every machine. */
export function wholePower(base: number, power: number): number {
  let result = 1;
  let square = base;
  for (let left = power; left > 0; left = Math.floor(left / 2)) {
    if (left % 2 === 1) result *= square;
    square *= square;
  }
  return result;
}

/** (n−1)!, exact up to n = 19, correctly rounded products beyond. Whole 1 ≤ n ≤ 171. */
function wholeGamma(n: number): number {
  let product = 1;
  for (let k = 2; k < n; k += 1) product *= k;
  return product;
}

/**
 * ln Γ(x) for x > 0.
 * @example logGamma(6) // Math.log(120)
 */
export function logGamma(x: number): number {
  requirePositive('argument of ln Γ', x, 'Give a shape above 0.');
  if (Number.isInteger(x) && x <= 20) return log(wholeGamma(x));
  let shifted = x;
  let product = 1;
  while (shifted < 16) {
    product *= shifted;
    shifted += 1;
  }
  const inverse = 1 / shifted;
  const square = inverse * inverse;
  let sum = 0;
  for (let k = STIRLING.length - 1; k >= 0; k -= 1) sum = sum * square + STIRLING[k]!;
  return (shifted - 0.5) * log(shifted) - shifted + HALF_LOG_TWO_PI + sum * inverse - log(product);
}

/**
 * Digamma ψ(x) = d ln Γ(x)/dx for x > 0.
 * @example digamma(6) // 1.7061176684318005
 */
export function digamma(x: number): number {
  requirePositive('argument of ψ', x, 'Give a shape above 0.');
  let shifted = x;
  let sum = 0;
  while (shifted < 16) {
    sum -= 1 / shifted;
    shifted += 1;
  }
  const square = 1 / (shifted * shifted);
  let series = 0;
  for (let k = DIGAMMA.length - 1; k >= 0; k -= 1) series = (series + DIGAMMA[k]!) * square;
  return sum + log(shifted) - 0.5 / shifted - series;
}

/** A gamma density of one shape and scale with all that its callers need in closed form. */
export interface GammaDensity {
  shape: number;
  scale: number;
  /** g(t) = t^(a−1) e^(−t/b) / (b^a Γ(a)); 0 for t < 0. t and b in seconds, the value per second. */
  density(t: number): number;
  /** g′(t), per second squared. */
  slope(t: number): number;
  /** ∫₀ᵗ g = P(a, t/b), the regularised incomplete gamma function, 0…1. */
  cumulative(t: number): number;
}

/**
 * The density g(t; shape a, scale b).
 *
 * Domain: a ≥ 1, b > 0 (below 1 the density is infinite at 0 and no response shape needs it).
 * Errors: `EngineError` outside of it.
 * @example gammaDensity(6, 1).density(5) // 0.17546736976785068
 */
export function gammaDensity(shape: number, scale: number): GammaDensity {
  if (!(shape >= 1) || !Number.isFinite(shape))
    throw new EngineError('gamma shape', shape, 'a number of at least 1', 'Use a shape of 1 or more.');
  requirePositive('gamma scale', scale, 'Give the scale in seconds, above 0.');
  const isWhole = Number.isInteger(shape) && shape <= WHOLE_LIMIT;
  const logNormaliser = isWhole ? 0 : logGamma(shape);
  const normaliser = isWhole ? 1 / (scale * wholeGamma(shape)) : 1 / scale;
  const lower = lowerTail(shape);

  function density(t: number): number {
    if (t < 0) return 0;
    const x = t / scale;
    if (isWhole) return normaliser * wholePower(x, shape - 1) * exp(-x);
    return x === 0 ? 0 : normaliser * exp((shape - 1) * log(x) - x - logNormaliser);
  }
  function slope(t: number): number {
    if (t < 0) return 0;
    const x = t / scale;
    if (isWhole) {
      const rise = shape === 1 ? 0 : (shape - 1) * wholePower(x, shape - 2);
      return ((normaliser * exp(-x)) / scale) * (rise - wholePower(x, shape - 1));
    }
    return x === 0 ? 0 : density(t) * ((shape - 1) / t - 1 / scale);
  }
  function cumulative(t: number): number {
    return t <= 0 ? 0 : t === Infinity ? 1 : lower(t / scale);
  }
  return { shape, scale, density, slope, cumulative };
}

/**
 * P(a, x) = γ(a, x)/Γ(a), a > 0, x ≥ 0.
 *
 * Below the mean the power series (all terms positive, so small values keep their relative accuracy); above it the
 * upper tail Q = 1 − P: a finite sum for whole a, Lentz's continued fraction otherwise.
 * @example regularisedGamma(1, 2) // 1 - Math.exp(-2)
 */
export function regularisedGamma(a: number, x: number): number {
  return lowerTail(a)(x);
}

/** x ↦ P(a, x) with what depends on a alone worked out once: a drag asks for thousands of values of two shapes. */
function lowerTail(a: number): (x: number) => number {
  if (Number.isInteger(a) && a <= WHOLE_LIMIT) {
    const factorial = wholeGamma(a + 1);
    return (x) => {
      if (!(x > 0)) return 0;
      if (x < a + 1) return ((wholePower(x, a) * exp(-x)) / factorial) * lowerSeries(a, x);
      return 1 - exp(-x) * partialExponential(a, x);
    };
  }
  const logFactorial = logGamma(a + 1);
  // x^a e^(−x) / Γ(a+1)
  const leading = (x: number) => exp(a * log(x) - x - logFactorial);
  return (x) => {
    if (!(x > 0)) return 0;
    if (x < a + 1) return leading(x) * lowerSeries(a, x);
    return 1 - leading(x) * a * upperFraction(a, x);
  };
}

/** Σ xⁿ / ((a+1)…(a+n)), until a term no longer changes the sum. */
function lowerSeries(a: number, x: number): number {
  let sum = 1;
  let term = 1;
  for (let n = 1; n < 1000; n += 1) {
    term *= x / (a + n);
    sum += term;
    if (term < sum * 1e-17) break;
  }
  return sum;
}

/** Σ_{k<a} x^k / k!, for whole a. */
function partialExponential(a: number, x: number): number {
  let sum = 1;
  for (let k = a - 1; k >= 1; k -= 1) sum = 1 + (sum * x) / k;
  return sum;
}

/** The continued fraction of Γ(a, x) / (x^a e^(−x)), modified Lentz; converges fast for x > a + 1. */
function upperFraction(a: number, x: number): number {
  const tiny = 1e-300;
  let b = x + 1 - a;
  let c = 1 / tiny;
  let d = 1 / b;
  let fraction = d;
  for (let n = 1; n < 1000; n += 1) {
    const factor = -n * (n - a);
    b += 2;
    d = factor * d + b;
    if (Math.abs(d) < tiny) d = tiny;
    c = b + factor / c;
    if (Math.abs(c) < tiny) c = tiny;
    d = 1 / d;
    const change = d * c;
    fraction *= change;
    if (Math.abs(change - 1) < 1e-16) break;
  }
  return fraction;
}
