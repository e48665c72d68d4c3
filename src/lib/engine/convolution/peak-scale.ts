import { EngineError, requireNotNegative } from '../errors';
import { maximise } from '../response/peak';
import type { Response } from '../response/response';
import type { Seconds } from '../units';

/**
 * The highest point of the response to one isolated event of the given duration (0: an impulse), exact.
 *
 * For an impulse it is the peak of the shape. For a boxcar it solves h(t) = h(t − d); the only places where the
 * maximum can lie are the first `length` seconds and the first `length` seconds after the end of the event.
 * @example singleEventPeak(doubleGamma(), 2) // { time: 6.0639991450042, value: 0.3395001097496391 }
 */
export function singleEventPeak(response: Response, duration: Seconds): { time: Seconds; value: number } {
  requireNotNegative('event duration', duration, 'Use 0 for a brief event or the length in seconds.');
  if (duration === 0) return response.peak;
  const height = (t: Seconds) => response.integral(t) - response.integral(t - duration);
  const slope = (t: Seconds) => response.value(t) - response.value(t - duration);
  // An untruncated shape is spent long before ten peak times.
  const reach = Math.min(response.length, 10 * response.peak.time + 20);
  const rising = maximise(height, slope, 0, reach);
  const falling = maximise(height, slope, duration, duration + reach);
  return falling.value > rising.value ? falling : rising;
}

const known = new WeakMap<Response, Map<Seconds, number>>();

/**
 * The factor that gives one isolated trial of this duration a highest point of 1, so that noise SD / √efficiency is
 * a standard error in percent signal change.
 *
 * Errors: `EngineError` when the response never rises above 0 (nothing to scale by).
 * @example peakScale(doubleGamma(), 0) // 1 / 0.17544120123194452
 */
export function peakScale(response: Response, duration: Seconds): number {
  const byDuration = known.get(response) ?? new Map<Seconds, number>();
  known.set(response, byDuration);
  const remembered = byDuration.get(duration);
  if (remembered !== undefined) return remembered;
  const peak = singleEventPeak(response, duration).value;
  if (!(peak > 0))
    throw new EngineError(
      `highest point of “${response.name}”`,
      peak,
      'a number above 0',
      'Scale efficiency by a response that rises above its baseline, not by a derivative or sine column.'
    );
  const scale = 1 / peak;
  byDuration.set(duration, scale);
  return scale;
}
