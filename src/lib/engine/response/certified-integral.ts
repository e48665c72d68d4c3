import { EngineError, requirePositive } from '../errors';
import { gaussLegendre } from '../linalg/gauss-legendre';
import type { Seconds } from '../units';

const RULE = gaussLegendre(16);
/** How far two independent rules may differ, as a share of ∫|h|. */
const CERTAINTY = 1e-12;

/**
 * ∫ from 0 to t of a smooth function on [0, length], for shapes without a closed form.
 *
 * Sixteen-point Gauss–Legendre on panels of `panel` seconds, summed once; a value costs one partial panel. Certified:
 * every panel is also integrated as two halves, and where the two disagree by more than 1e-12 of ∫|h| the function
 * refuses to be built.
 * Errors: `EngineError` when the certificate fails (a jump or a kink inside a panel).
 */
export function certifiedIntegral(
  h: (t: Seconds) => number,
  length: Seconds,
  panel: Seconds = 0.5
): (t: Seconds) => number {
  requirePositive('length of the integral', length, 'Give it in seconds, above 0.');
  const count = Math.ceil(length / panel - 1e-9);
  const ends = Array.from({ length: count + 1 }, (_, i) => Math.min(i * panel, length));
  const sums = new Float64Array(count + 1);
  let absolute = 0;
  let worst = 0;
  for (let i = 0; i < count; i += 1) {
    const [low, high] = [ends[i]!, ends[i + 1]!];
    const middle = (low + high) / 2;
    const whole = over(h, low, high);
    worst = Math.max(worst, Math.abs(whole - over(h, low, middle) - over(h, middle, high)));
    sums[i + 1] = sums[i]! + whole;
    absolute += over((t) => Math.abs(h(t)), low, high);
  }
  if (!(worst <= CERTAINTY * absolute))
    throw new EngineError(
      'disagreement of two integration rules',
      worst,
      `at most ${CERTAINTY * absolute}`,
      'Give a smooth shape, or one with an integral of its own.'
    );
  return (t) => {
    if (t <= 0) return 0;
    if (t >= length) return sums[count]!;
    const i = Math.min(count - 1, Math.floor(t / panel));
    return sums[i]! + over(h, ends[i]!, t);
  };
}

function over(h: (t: Seconds) => number, low: Seconds, high: Seconds): number {
  const half = (high - low) / 2;
  const middle = (high + low) / 2;
  let sum = 0;
  for (let k = 0; k < RULE.nodes.length; k += 1) sum += RULE.weights[k]! * h(middle + half * RULE.nodes[k]!);
  return sum * half;
}
