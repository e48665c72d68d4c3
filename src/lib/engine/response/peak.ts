import type { Seconds } from '../units';

/**
 * The root of a continuous function in [low, high] where it changes sign, by bisection to the last bit.
 *
 * Chosen over Newton because it cannot leave the bracket and ends at the same double on every machine.
 */
export function bisect(f: (t: Seconds) => number, low: Seconds, high: Seconds): Seconds {
  const rising = f(low) < f(high);
  let a = low;
  let b = high;
  for (let i = 0; i < 200; i += 1) {
    const middle = (a + b) / 2;
    if (middle <= a || middle >= b) break;
    const value = f(middle);
    if (value === 0) return middle;
    if (value < 0 === rising) a = middle;
    else b = middle;
  }
  return (a + b) / 2;
}

/**
 * The maximum of a smooth function over [low, high]: the best of `points` grid points, then the root of the slope
 * in the two steps around it. Where the slope does not change sign there (a maximum at a border or a corner) the
 * grid point stands.
 */
export function maximise(
  f: (t: Seconds) => number,
  slope: (t: Seconds) => number,
  low: Seconds,
  high: Seconds,
  points = 512
): { time: Seconds; value: number } {
  const step = (high - low) / points;
  let best = 0;
  let value = -Infinity;
  for (let i = 0; i <= points; i += 1) {
    const candidate = f(low + i * step);
    if (candidate > value) {
      value = candidate;
      best = i;
    }
  }
  const grid = low + best * step;
  const left = Math.max(low, grid - step);
  const right = Math.min(high, grid + step);
  if (slope(left) > 0 && slope(right) < 0) {
    const time = bisect(slope, left, right);
    const refined = f(time);
    if (refined >= value) return { time, value: refined };
  }
  return { time: grid, value };
}
