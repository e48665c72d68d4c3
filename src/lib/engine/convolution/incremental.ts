import { requireFinite } from '../errors';
import type { Response } from '../response/response';
import type { Seconds } from '../units';
import { addEvent, requireEvent, type DesignEvent } from './event';
import { requireTimes } from './times';

/**
 * A regressor that changes with its events: adding, removing or moving one costs the length of the kernel, not of
 * the run. `values` is the live array; it equals `regressor(events, …)` to within rounding (about 1e-16 of the peak
 * per change).
 *
 * Errors: `EngineError` for malformed events; a refused event leaves the values unchanged.
 * @example
 * const line = new IncrementalRegressor(doubleGamma(), volumeTimes({ tr: 2, volumes: 200 }));
 * line.add({ onset: 10, duration: 0 });
 * line.move({ onset: 10, duration: 0 }, { onset: 12, duration: 0 });
 */
export class IncrementalRegressor {
  readonly values: Float64Array;

  constructor(
    readonly response: Response,
    readonly times: ArrayLike<Seconds>,
    readonly scale = 1,
    events: readonly DesignEvent[] = []
  ) {
    requireTimes(times);
    requireFinite('regressor scale', scale, 'Use 1 for the unscaled formula.');
    this.values = new Float64Array(times.length);
    for (const event of events) this.add(event);
  }

  add(event: DesignEvent): void {
    addEvent(this.values, this.times, this.response, requireEvent(event), this.scale);
  }

  remove(event: DesignEvent): void {
    addEvent(this.values, this.times, this.response, requireEvent(event), -this.scale);
  }

  move(from: DesignEvent, to: DesignEvent): void {
    requireEvent(to);
    this.remove(from);
    this.add(to);
  }
}
