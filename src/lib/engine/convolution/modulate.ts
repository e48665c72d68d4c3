import { EngineError, requireFinite } from '../errors';
import type { DesignEvent } from './event';

/**
 * A parametric column's events: the same onsets and durations with heights from one number per event, mean-centred
 * unless told otherwise, so that the unmodulated column keeps its meaning as the average event.
 *
 * Numbers are multiplied onto heights the events already have.
 * @param values one finite number per event
 * Errors: `EngineError` for another count or a gap.
 * @example modulated([{ onset: 0, duration: 0 }, { onset: 20, duration: 0 }], [1, 3]).map((e) => e.height) // -1, 1
 */
export function modulated(
  events: readonly DesignEvent[],
  values: ArrayLike<number>,
  isCentred = true
): DesignEvent[] {
  if (values.length !== events.length)
    throw new EngineError(
      'number of modulator values',
      values.length,
      `${events.length}, one per event`,
      'Give every event its value.'
    );
  let sum = 0;
  for (let i = 0; i < values.length; i += 1)
    sum += requireFinite(`modulator value ${i + 1}`, values[i]!, 'Fill the gap or leave the event out.');
  const middle = isCentred && values.length > 0 ? sum / values.length : 0;
  return events.map((event, i) => ({ ...event, height: (event.height ?? 1) * (values[i]! - middle) }));
}

/** The same events as brief impulses, for finite impulse response columns. */
export function asImpulses(events: readonly DesignEvent[]): DesignEvent[] {
  return events.map((event) => ({ ...event, duration: 0 }));
}
