/**
 * Bit work on doubles: the only place that looks inside IEEE 754 numbers.
 *
 * Every operation here is exact (or rounds once, where a result is subnormal), so it is the same on any
 * machine that has IEEE 754 doubles, which ECMAScript demands.
 */

const view = new DataView(new ArrayBuffer(8));

/** 2^k for −1074 ≤ k ≤ 1023, exact; built by halving and doubling, which never round. */
const POWERS = (() => {
  const table = new Float64Array(1074 + 1023 + 1);
  table[1074] = 1;
  for (let k = 1; k <= 1023; k++) table[1074 + k] = table[1074 + k - 1]! * 2;
  for (let k = -1; k >= -1074; k--) table[1074 + k] = table[1074 + k + 1]! / 2;
  return table;
})();

/** Exact 2^k. Domain: integer k, −1074 ≤ k ≤ 1023. */
export function powerOfTwo(k: number): number {
  return POWERS[1074 + k]!;
}

/** x · 2^k for integer k, |k| ≤ 2100, rounded once at most: overflow gives ±∞, underflow goes gradually to 0. */
export function scaleByPowerOfTwo(x: number, k: number): number {
  if (k > 1023) {
    const most = x * powerOfTwo(1023);
    return k > 2046 ? most * powerOfTwo(1023) * powerOfTwo(k - 2046) : most * powerOfTwo(k - 1023);
  }
  if (k >= -1022) return x * powerOfTwo(k);
  // Two steps, the first exact: a product straight into the subnormal range would round only once anyway,
  // but 2^k itself has no double below 2^−1074.
  return k < -2044 ? 0 * x : x * powerOfTwo(-1022) * powerOfTwo(Math.max(k + 1022, -1074));
}

/**
 * The binary exponent e of x, with 2^e ≤ |x| < 2^(e+1).
 * Domain: finite x ≠ 0, subnormals included.
 */
export function exponentOf(x: number): number {
  view.setFloat64(0, x);
  const biased = (view.getUint32(0) >>> 20) & 0x7ff;
  if (biased !== 0) return biased - 1023;
  view.setFloat64(0, x * POWERS[1074 + 54]!);
  return ((view.getUint32(0) >>> 20) & 0x7ff) - 1023 - 54;
}

/** The 64 bits of x as an unsigned integer: used by tests to count units in the last place. */
export function bitsOf(x: number): bigint {
  view.setFloat64(0, x);
  return view.getBigUint64(0);
}
