import { requireFinite } from '../errors';
import type { Response } from '../response/response';
import type { Seconds } from '../units';
import { addEvent, requireEvent, type DesignEvent } from './event';
import { requireTimes } from './times';

/**
 * The predicted signal of one condition: scale · Σⱼ heightⱼ (eventⱼ ∗ response)(tₙ), in closed form.
 *
 * Events may lie before time 0, overlap, or outlast the run; the order of the list does not matter beyond rounding.
 * @param events any number of events, also none (all zero)
 * @param times when each volume is modelled, s, rising (`volumeTimes` or a list of one's own)
 * @param scale stated divisor's inverse: `peakScale(response, duration)` for percent signal change, 1 for the raw formula
 * @returns one value per volume
 * Errors: `EngineError` for NaN, negative durations, unsorted times.
 * @example regressor([{ onset: 0, duration: 0 }], doubleGamma(), [0, 5]) // 0, 0.17544116219546391
 */
export function regressor(
  events: readonly DesignEvent[],
  response: Response,
  times: ArrayLike<Seconds>,
  scale = 1
): Float64Array {
  requireTimes(times);
  requireFinite('regressor scale', scale, 'Use 1 for the unscaled formula.');
  const out = new Float64Array(times.length);
  for (const event of events) addEvent(out, times, response, requireEvent(event), scale);
  return out;
}
