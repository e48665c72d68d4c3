/**
 * Predicted signals that follow the run while something is dragged. Only events that differ from the last update are
 * taken out and put in, so that a frame costs the length of one response and not of the run.
 */
import { IncrementalRegressor } from '$lib/engine/convolution/incremental';
import type { Response } from '$lib/engine/response/response';
import type { ModelledEvent } from '$lib/task/compile';
import { toSeconds } from '$lib/task/time';

interface Placed {
  factor: string;
  onset: number;
  duration: number;
}

/** After so many changes the sums are made anew: rounding may not creep in over a long afternoon. */
const REBUILD_AFTER = 20_000;

export class LiveSignal {
  readonly #response: Response;
  readonly #times: Float64Array;
  readonly #scales: ReadonlyMap<string, number>;
  #lines = new Map<string, IncrementalRegressor>();
  #placed = new Map<string, Placed>();
  #changes = 0;

  /** `scales`: factor key → what its isolated event is multiplied by; factors that are not in it are not drawn. */
  constructor(response: Response, times: Float64Array, scales: ReadonlyMap<string, number>) {
    this.#response = response;
    this.#times = times;
    this.#scales = scales;
    this.#start();
  }

  /** Follows the events; afterwards `values` is the signal of exactly these. */
  update(events: readonly ModelledEvent[]): void {
    if (this.#changes > REBUILD_AFTER) this.#start();
    const next = new Map<string, Placed>();
    for (const e of events)
      if (this.#scales.has(e.factor))
        next.set(`${e.trialId} ${e.itemId}`, { factor: e.factor, onset: e.onset, duration: e.duration });
    for (const [key, was] of this.#placed) {
      const is = next.get(key);
      if (is && is.factor === was.factor && is.onset === was.onset && is.duration === was.duration) continue;
      this.#lines.get(was.factor)?.remove(inSeconds(was));
      this.#changes++;
      this.#placed.delete(key);
    }
    for (const [key, is] of next) {
      if (this.#placed.has(key)) continue;
      this.#lines.get(is.factor)?.add(inSeconds(is));
      this.#changes++;
      this.#placed.set(key, is);
    }
  }

  values(factor: string): Float64Array {
    return this.#lines.get(factor)?.values ?? new Float64Array(this.#times.length);
  }

  #start(): void {
    this.#changes = 0;
    this.#placed.clear();
    this.#lines = new Map(
      [...this.#scales].map(([key, scale]) => [
        key,
        new IncrementalRegressor(this.#response, this.#times, scale)
      ])
    );
  }
}

const inSeconds = (p: Placed) => ({ onset: toSeconds(p.onset), duration: toSeconds(p.duration) });
