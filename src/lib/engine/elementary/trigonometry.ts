import { fold } from './reduction';

/** 1/n! for the odd n = 3…19 and the even n = 4…20, signs alternating as in the two series. */
const SINE: number[] = [];
const COSINE: number[] = [];
for (let n = 2, f = 2; n <= 20; n++, f *= n) {
  if (n % 2 === 1) SINE.push((n % 4 === 3 ? -1 : 1) / f);
  else if (n > 2) COSINE.push((n % 4 === 2 ? -1 : 1) / f);
}

function horner(coefficients: number[], z: number): number {
  let sum = 0;
  for (let i = coefficients.length - 1; i >= 0; i--) sum = coefficients[i]! + z * sum;
  return sum;
}

/** sin(x + low), |x| ≤ π/4: Taylor's series to x^19. */
function sineKernel(x: number, low: number): number {
  const z = x * x;
  return x + (x * z * horner(SINE, z) + low * (1 - 0.5 * z));
}

/** cos(x + low), |x| ≤ π/4: 1 − x²/2 with its own rounding put back, then Taylor's series to x^20. */
function cosineKernel(x: number, low: number): number {
  const z = x * x;
  const half = 0.5 * z;
  const w = 1 - half;
  return w + (1 - w - half + (z * z * horner(COSINE, z) - x * low));
}

/**
 * Sine of an angle in radians; error below 1 unit in the last place for every finite x (the fold to |x| ≤ π/4 is
 * exact enough near every zero). NaN for NaN and ±∞; sin(−0) is −0.
 */
export function sin(x: number): number {
  if (!Number.isFinite(x)) return NaN;
  if (x === 0) return x;
  const { quarter, high, low } = fold(x);
  if (quarter === 0) return sineKernel(high, low);
  if (quarter === 1) return cosineKernel(high, low);
  return quarter === 2 ? -sineKernel(high, low) : -cosineKernel(high, low);
}

/** Cosine of an angle in radians; as {@link sin}. */
export function cos(x: number): number {
  if (!Number.isFinite(x)) return NaN;
  const { quarter, high, low } = fold(x);
  if (quarter === 0) return cosineKernel(high, low);
  if (quarter === 1) return -sineKernel(high, low);
  return quarter === 2 ? -cosineKernel(high, low) : sineKernel(high, low);
}
