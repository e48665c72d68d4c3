import { requirePositive } from '../errors';
import type { Seconds } from '../units';
import type { Response } from './response';

/**
 * A response as points for drawing, from 0 to the end of its support (or 40 s of an endless one), scaled to peak 1
 * where `isPeakOne` says so.
 * @returns times in seconds and values, of one length
 */
export function plotOf(
  response: Response,
  step: Seconds = 0.1,
  isPeakOne = false
): { times: Float64Array; values: Float64Array } {
  requirePositive('step of the plot', step, 'Use 0.1 s.');
  const end = Number.isFinite(response.length) ? response.length : 40;
  const count = Math.floor(end / step + 1e-9) + 1;
  const times = Float64Array.from({ length: count }, (_, i) => i * step);
  const scale = isPeakOne && response.peak.value > 0 ? 1 / response.peak.value : 1;
  return { times, values: times.map((t) => scale * response.value(t)) };
}
