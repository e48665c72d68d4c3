import { EngineError } from '../errors';
import type { Seconds } from '../units';
import { maximise } from './peak';
import type { Response } from './response';

export interface Part {
  weight: number;
  response: Response;
  /** Seconds by which this part comes later. */
  shift?: Seconds;
}

/**
 * Σ wᵢ hᵢ(t − shiftᵢ) on 0 ≤ t ≤ length: differences of shapes, sums of shapes. The integral is the same sum of
 * integrals, so it stays closed where the parts are.
 */
export function combination(name: string, parts: readonly Part[], length: Seconds): Response {
  if (!(length > 0) || parts.length === 0)
    throw new EngineError(
      'combined response',
      parts,
      'parts and a length above 0',
      'Give at least one part.'
    );
  const value = (t: Seconds) => {
    if (t < 0 || t > length) return 0;
    return parts.reduce((sum, part) => sum + part.weight * part.response.value(t - (part.shift ?? 0)), 0);
  };
  const integral = (t: Seconds) => {
    const end = Math.min(t, length);
    return parts.reduce(
      (sum, part) => sum + part.weight * part.response.integral(end - (part.shift ?? 0)),
      0
    );
  };
  // No slope in closed form in general: the grid maximum of a fine grid, refined by a central difference.
  const slope = (t: Seconds) => value(t + 1e-5) - value(t - 1e-5);
  const reach = Number.isFinite(length) ? length : 100;
  return { name, length, value, integral, peak: maximise(value, slope, 0, reach) };
}
