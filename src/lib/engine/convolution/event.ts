import { requireFinite, requireNotNegative } from '../errors';
import { MICRO, type Seconds } from '../units';
import type { Response } from '../response/response';

/** One event of one condition. */
export interface DesignEvent {
  /** Seconds from the first stored volume; may be negative. */
  onset: Seconds;
  /** Seconds; 0 is a unit impulse (area 1 s), anything longer a boxcar of height 1. */
  duration: Seconds;
  /** Multiplies the event; 1 unless a modulator says otherwise. */
  height?: number;
}

/** Throws `EngineError` unless onset and height are finite and the duration is not negative; returns the event. */
export function requireEvent(event: DesignEvent): DesignEvent {
  requireFinite('event onset', event.onset, 'Give the onset in seconds from the first stored volume.');
  requireNotNegative('event duration', event.duration, 'Use 0 for a brief event or the length in seconds.');
  if (event.height !== undefined) requireFinite('event height', event.height, 'Give the modulator a number.');
  return event;
}

/** Half a microsecond: documents cannot hold a finer difference, so a lag this close to an edge is at the edge. */
export const EDGE: Seconds = MICRO / 2;

/** Index of the first time not before `moment`, by bisection; times.length if there is none. */
export function firstAtOrAfter(times: ArrayLike<Seconds>, moment: Seconds): number {
  let low = 0;
  let high = times.length;
  while (low < high) {
    const middle = (low + high) >>> 1;
    if (times[middle]! < moment) low = middle + 1;
    else high = middle;
  }
  return low;
}

/**
 * Adds `weight` · (event ∗ response) at the given times onto `out`; touches only the volumes the response reaches.
 *
 * Impulse: h(t − onset). Boxcar: H(t − onset) − H(t − onset − duration) with H = ∫h, so no fine grid is involved.
 * Lags within half a microsecond of an end of the support are moved onto it: binary fractions of decimal seconds
 * must not decide whether the last point of the kernel counts.
 */
export function addEvent(
  out: Float64Array,
  times: ArrayLike<Seconds>,
  response: Response,
  event: DesignEvent,
  weight: number
): void {
  const { onset, duration } = event;
  const scaled = weight * (event.height ?? 1);
  if (scaled === 0) return;
  const length = response.length;
  const isImpulse = duration === 0;
  const end = onset + duration + length + EDGE;
  for (let n = firstAtOrAfter(times, onset - EDGE); n < times.length; n += 1) {
    const time = times[n]!;
    if (time > end) break;
    const lag = Math.max(0, time - onset);
    if (isImpulse) out[n]! += scaled * response.value(lag > length ? length : lag);
    else out[n]! += scaled * (response.integral(lag) - response.integral(lag - duration));
  }
}
