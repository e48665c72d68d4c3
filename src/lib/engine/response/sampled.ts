import { EngineError, requireFinite, requirePositive } from '../errors';
import type { Seconds } from '../units';
import type { Response } from './response';

/**
 * A response of one's own, learned from a region's signal: samples at 0, step, 2·step …, joined by cubic pieces that
 * never overshoot (slopes by Fritsch and Carlson's rule), 0 outside. Passes through every sample; value, slope and
 * integral of the pieces are exact polynomials, and so is the peak.
 *
 * @param samples at least two finite numbers, the first at t = 0
 * @param step seconds between samples
 * Source: Fritsch FN, Carlson RE (1980) Monotone piecewise cubic interpolation. SIAM J Numer Anal 17:238–246 (slope
 * rule: the weighted harmonic mean of Fritsch and Butland 1984; both from memory).
 * Errors: `EngineError` for fewer than two samples, gaps, step ≤ 0.
 * @example sampledResponse('line', [0, 4, 8, 12], 2).integral(6) // 36
 */
export function sampledResponse(name: string, samples: ArrayLike<number>, step: Seconds): Response {
  requirePositive('distance of the samples', step, 'Give it in seconds, for instance 0.5.');
  const count = samples.length;
  if (count < 2)
    throw new EngineError('number of samples', count, 'at least 2', 'Sample the response over 20 s or more.');
  const y = Float64Array.from(samples);
  y.forEach((value, i) => requireFinite(`sample ${i} of the response`, value, 'Fill the gap.'));
  const slopes = monotoneSlopes(y);
  const length = (count - 1) * step;
  const pieces = Array.from({ length: count - 1 }, (_, i) =>
    piece(y[i]!, y[i + 1]!, slopes[i]!, slopes[i + 1]!)
  );
  const sums = new Float64Array(count);
  pieces.forEach((p, i) => (sums[i + 1] = sums[i]! + step * area(p, 1)));

  function at(t: Seconds): { piece: Piece; x: number; index: number } {
    const index = Math.min(count - 2, Math.floor(t / step));
    return { piece: pieces[index]!, x: t / step - index, index };
  }
  const value = (t: Seconds) => {
    if (t < 0 || t > length) return 0;
    const {
      piece: [a, b, c, d],
      x
    } = at(t);
    return a + x * (b + x * (c + x * d));
  };
  const slope = (t: Seconds) => {
    if (t < 0 || t > length) return 0;
    const {
      piece: [, b, c, d],
      x
    } = at(t);
    return (b + x * (2 * c + 3 * x * d)) / step;
  };
  const integral = (t: Seconds) => {
    if (t <= 0) return 0;
    if (t >= length) return sums[count - 1]!;
    const { piece: p, x, index } = at(t);
    return sums[index]! + step * area(p, x);
  };
  // Pieces never overshoot, so the highest sample is the exact maximum.
  let best = 0;
  y.forEach((sample, i) => (best = sample > y[best]! ? i : best));
  return { name, length, value, slope, integral, peak: { time: best * step, value: y[best]! } };
}

/** a + b x + c x² + d x³ on 0…1. */
type Piece = [number, number, number, number];

function piece(left: number, right: number, slopeLeft: number, slopeRight: number): Piece {
  const rise = right - left;
  return [left, slopeLeft, 3 * rise - 2 * slopeLeft - slopeRight, slopeLeft + slopeRight - 2 * rise];
}

/** ∫₀ˣ of a piece. */
function area([a, b, c, d]: Piece, x: number): number {
  return x * (a + x * (b / 2 + x * (c / 3 + (x * d) / 4)));
}

/** Slopes per step: 0 at turning points, the harmonic mean of the two rises between, one-sided at the ends. */
function monotoneSlopes(y: Float64Array): Float64Array {
  const last = y.length - 1;
  const rise = (i: number) => y[i + 1]! - y[i]!;
  return y.map((_, i) => {
    if (i === 0) return endSlope(rise(0), last > 1 ? rise(1) : rise(0));
    if (i === last) return endSlope(rise(last - 1), last > 1 ? rise(last - 2) : rise(0));
    const before = rise(i - 1);
    const after = rise(i);
    return before * after > 0 ? (2 * before * after) / (before + after) : 0;
  });
}

/** Three-point slope at an end, limited so that the piece stays monotone. */
function endSlope(near: number, next: number): number {
  const slope = (3 * near - next) / 2;
  if (slope * near <= 0) return 0;
  return near * next <= 0 && Math.abs(slope) > 3 * Math.abs(near) ? 3 * near : slope;
}
