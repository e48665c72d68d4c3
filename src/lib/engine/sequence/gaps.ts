import { exp, expm1, log, log1p } from '../elementary';
import { EngineError, requireFinite, requireNotNegative, requirePositive } from '../errors';
import type { Random } from '../random';
import type { Seconds } from '../units';

/**
 * Mean of the exponential density cut to [a, b]: a + λ − (b − a)/(e^((b−a)/λ) − 1).
 * Domain: a < b, λ > 0 or < 0 (rising density); λ = ±∞ is uniform.
 * @example truncatedExponentialMean(2, 12, 3) // 4.630062934099644
 */
export function truncatedExponentialMean(a: Seconds, b: Seconds, lambda: Seconds): Seconds {
  const width = b - a;
  const x = width / lambda;
  // Near λ = ∞ the two terms cancel; series 1/x − 1/(eˣ − 1) = ½ − x/12 + x³/720 − x⁵/30240.
  if (Math.abs(x) < 0.02) return a + width * (0.5 - x / 12 + (x * x * x) / 720);
  return a + lambda - width / expm1(x);
}

/**
 * The λ that gives the cut exponential this mean. Means above the middle give a negative λ (longer gaps likelier);
 * the exact middle gives Infinity, which is uniform.
 * Domain: a < mean < b. Errors: `EngineError`.
 * @example truncatedExponentialScale(2, 12, 5) // 3.74236951167337
 */
export function truncatedExponentialScale(a: Seconds, b: Seconds, mean: Seconds): Seconds {
  requireRange(a, b);
  if (!(mean > a && mean < b))
    throw new EngineError(
      'mean gap',
      mean,
      `a number between ${a} and ${b}, both excluded`,
      'Move the bounds or the mean.'
    );
  const middle = (a + b) / 2;
  if (mean === middle) return Infinity;
  // In the rate 1/λ the mean falls steadily from b to a.
  const width = b - a;
  const rate = rootOf((x) => mean - truncatedExponentialMean(a, b, width / x), -1e9, 1e9);
  return width / rate;
}

/** One draw of the cut exponential, by inverting its distribution function. */
export function drawTruncatedExponential(a: Seconds, b: Seconds, lambda: Seconds, random: Random): Seconds {
  const u = random.next();
  if (!Number.isFinite(lambda)) return a + u * (b - a);
  // A negative λ is the mirror image.
  if (lambda < 0) return a + b - drawFrom(a, b, -lambda, u);
  return drawFrom(a, b, lambda, u);
}

function drawFrom(a: Seconds, b: Seconds, lambda: Seconds, u: number): Seconds {
  return Math.min(b, a - lambda * log1p(u * expm1(-(b - a) / lambda)));
}

/** Gaps that can occur, each with its probability. */
export interface GapLaw {
  readonly values: Seconds[];
  readonly probabilities: number[];
  readonly mean: Seconds;
  readonly variance: number;
}

/** Law of given values with given weights (need not sum to 1). Errors: `EngineError` for none, or negative ones. */
export function gapLaw(values: readonly Seconds[], weights: readonly number[]): GapLaw {
  if (values.length === 0 || values.length !== weights.length)
    throw new EngineError('list of gaps', values, 'at least one gap, each with one weight', 'Name a gap.');
  for (const value of values) requireNotNegative('gap', value, 'Give the gap in seconds.');
  for (const weight of weights) requireNotNegative('weight of a gap', weight, 'Use 1 for each gap alike.');
  const total = weights.reduce((a, b) => a + b, 0);
  requirePositive('sum of the weights', total, 'Give a gap a weight.');
  const probabilities = weights.map((weight) => weight / total);
  const mean = values.reduce((sum, value, i) => sum + value * probabilities[i]!, 0);
  const variance = values.reduce((sum, value, i) => sum + (value - mean) ** 2 * probabilities[i]!, 0);
  return { values: [...values], probabilities, mean, variance };
}

/** Every gap the same. */
export const fixedGap = (gap: Seconds): GapLaw => gapLaw([gap], [1]);

/**
 * Each grid value from a to b alike.
 * @example uniformGaps(2, 10, 2).variance // 8
 */
export function uniformGaps(a: Seconds, b: Seconds, grid: Seconds): GapLaw {
  const values = gridValues(a, b, grid);
  return gapLaw(
    values,
    values.map(() => 1)
  );
}

/**
 * Geometric on the grid a, a + grid, … b: each value q times as likely as the one before. It is also the exponential
 * density cut to the grid.
 * @param q above 0; 1 is uniform
 * @example geometricGaps(2, 12, 2, 0.5).mean // 3.8095238095238093
 */
export function geometricGaps(a: Seconds, b: Seconds, grid: Seconds, q: number): GapLaw {
  requirePositive('ratio of neighbouring gaps', q, 'Use 0.5 to halve from step to step, 1 for uniform.');
  const rate = log(q);
  const values = gridValues(a, b, grid);
  // From the likelier end, so that no weight overflows.
  return gapLaw(
    values,
    values.map((_, i) => exp(rate * (rate <= 0 ? i : i - values.length + 1)))
  );
}

/**
 * The geometric law on the grid that has this mean, exactly (to 1e-12 s).
 * Domain: a < mean < b (or all three equal). Errors: `EngineError`.
 */
export function geometricGapsWithMean(a: Seconds, b: Seconds, grid: Seconds, mean: Seconds): GapLaw {
  const values = gridValues(a, b, grid);
  const low = values[0]!;
  const high = values.at(-1)!;
  if (low === high && Math.abs(mean - low) < 1e-9) return fixedGap(low);
  if (!(mean > low && mean < high))
    throw new EngineError(
      'mean gap',
      mean,
      `a number between ${low} and ${high}, both excluded`,
      'Move the bounds or the mean.'
    );
  const rate = rootOf((x) => geometricGaps(a, b, grid, exp(x)).mean - mean, -60, 60);
  return geometricGaps(a, b, grid, exp(rate));
}

/**
 * `count` gaps that follow a law as evenly as whole numbers allow (largest remainders), in random order.
 *
 * With `sum` in grid steps of the law's values they also add up exactly: single gaps are moved by one step to a
 * neighbouring value, those chosen at random.
 */
export function drawGapsEvenly(law: GapLaw, count: number, random: Random, total?: Seconds): Seconds[] {
  const shares = law.probabilities.map((p) => p * count);
  const counts = shares.map(Math.floor);
  const left = count - counts.reduce((a, b) => a + b, 0);
  const byRemainder = shares
    .map((share, i) => ({ i, rest: share - Math.floor(share) }))
    .sort((x, y) => y.rest - x.rest || x.i - y.i);
  for (const { i } of byRemainder.slice(0, left)) counts[i]!++;
  const places = random.shuffle(counts.flatMap((n, i) => new Array<number>(n).fill(i)));
  if (total !== undefined) meetTotal(law, places, random, total);
  return places.map((i) => law.values[i]!);
}

function meetTotal(law: GapLaw, places: number[], random: Random, total: Seconds): void {
  const { values } = law;
  const sumOf = () => places.reduce((sum, i) => sum + values[i]!, 0);
  const step = values.length > 1 ? values[1]! - values[0]! : 0;
  let missing = step > 0 ? Math.round((total - sumOf()) / step) : 0;
  while (missing !== 0) {
    const by = missing > 0 ? 1 : -1;
    const open = places.map((i, t) => (values[i + by] !== undefined ? t : -1)).filter((t) => t >= 0);
    if (open.length === 0) break;
    for (const t of random.shuffle(open).slice(0, Math.abs(missing))) {
      places[t]! += by;
      missing -= by;
    }
  }
  if (Math.abs(sumOf() - total) > 1e-6)
    throw new EngineError(
      'sum of the gaps',
      total,
      `a sum that ${places.length} gaps from ${values[0]} to ${values.at(-1)} s on their grid can have`,
      'Move the mean to a multiple of the grid over the count.'
    );
}

function requireRange(a: Seconds, b: Seconds): void {
  requireNotNegative('smallest gap', a, 'Give the gap in seconds, 0 for none.');
  requireFinite('largest gap', b, 'Give the gap in seconds.');
  if (b < a)
    throw new EngineError('largest gap', b, `a number not below the smallest gap, ${a}`, 'Exchange the two.');
}

/** a, a + grid, … up to b, each from its own index. */
function gridValues(a: Seconds, b: Seconds, grid: Seconds): Seconds[] {
  requireRange(a, b);
  requirePositive('grid of the gaps', grid, 'Use TR, TR/2 or TR/4, in seconds.');
  const steps = Math.floor((b - a) / grid + 1e-9);
  if (steps > 100_000)
    throw new EngineError(
      'grid of the gaps',
      grid,
      'at most 100000 steps between the bounds',
      'Use a coarser grid.'
    );
  return Array.from({ length: steps + 1 }, (_, i) => a + i * grid);
}

/** Root of a steadily rising function by bisection, to the last bit or so. */
function rootOf(f: (x: number) => number, low: number, high: number): number {
  for (let i = 0; i < 200; i++) {
    const middle = (low + high) / 2;
    if (middle === low || middle === high) break;
    if (f(middle) < 0) low = middle;
    else high = middle;
  }
  return (low + high) / 2;
}
