/**
 * Predicted signals that follow the run while something is dragged. Only events that differ from the last update are
 * taken out and put in. On an even grid the samples of one event depend on its duration and on how far its onset lies
 * from the next sample, and on a grid of onsets that is a handful of cases: each is computed once and then added.
 */
import { regressor } from '$lib/engine/convolution/regressor';
import type { Response } from '$lib/engine/response/response';
import type { ModelledEvent } from '$lib/task/compile';
import { MICROS } from '$lib/task/time';

/** Sample times `from + i · step`, µs. */
export interface EvenGrid {
  from: number;
  step: number;
  count: number;
}

interface Placed {
  factor: string;
  onset: number;
  duration: number;
}

/** After so many changes the sums are made anew: rounding may not creep in over a long afternoon. */
const REBUILD_AFTER = 50_000;
/** Cases kept; on the ms grid there can be many, and a forgotten one is only computed again. */
const MOST_SHAPES = 4000;

export class LiveSignal {
  readonly #response: Response;
  readonly #grid: EvenGrid;
  readonly #scales: ReadonlyMap<string, number>;
  #sums = new Map<string, Float64Array>();
  #placed = new Map<string, Placed>();
  #shapes = new Map<string, Float64Array>();
  #changes = 0;

  /** `scales`: factor key → what its isolated event is multiplied by; factors that are not in it are not drawn. */
  constructor(response: Response, grid: EvenGrid, scales: ReadonlyMap<string, number>) {
    this.#response = response;
    this.#grid = grid;
    this.#scales = scales;
    this.#start();
  }

  /** Follows the events; afterwards `values` is the signal of exactly these. */
  update(events: readonly ModelledEvent[]): void {
    if (this.#changes > REBUILD_AFTER) this.#start();
    const next = new Map<string, Placed>();
    for (const e of events) if (this.#scales.has(e.factor)) next.set(`${e.trialId} ${e.itemId}`, e);
    for (const [key, was] of this.#placed) {
      const is = next.get(key);
      if (is && is.factor === was.factor && is.onset === was.onset && is.duration === was.duration) continue;
      this.#add(was, -1);
      this.#placed.delete(key);
    }
    for (const [key, is] of next) {
      if (this.#placed.has(key)) continue;
      this.#add(is, 1);
      this.#placed.set(key, { factor: is.factor, onset: is.onset, duration: is.duration });
    }
  }

  values(factor: string): Float64Array {
    return this.#sums.get(factor) ?? new Float64Array(this.#grid.count);
  }

  #start(): void {
    this.#changes = 0;
    this.#placed.clear();
    this.#sums = new Map([...this.#scales.keys()].map((key) => [key, new Float64Array(this.#grid.count)]));
  }

  #add(event: Placed, sign: 1 | -1): void {
    const sum = this.#sums.get(event.factor);
    if (!sum) return;
    this.#changes++;
    const { from, step, count } = this.#grid;
    const first = Math.ceil((event.onset - from) / step);
    const shape = this.#shape(event.duration, from + first * step - event.onset);
    const scale = sign * (this.#scales.get(event.factor) ?? 0);
    const end = Math.min(count, first + shape.length);
    for (let i = Math.max(0, first); i < end; i++) sum[i]! += scale * shape[i - first]!;
  }

  /** Samples of one event, the first `lag` µs after its onset. */
  #shape(duration: number, lag: number): Float64Array {
    const key = `${duration} ${lag}`;
    const known = this.#shapes.get(key);
    if (known) return known;
    const seconds = duration / MICROS;
    const reach = (this.#response.length + seconds) * MICROS - lag;
    const length = Math.max(1, Math.floor(reach / this.#grid.step + 1e-6) + 1);
    const times = Float64Array.from({ length }, (_, i) => (lag + i * this.#grid.step) / MICROS);
    const made = regressor([{ onset: 0, duration: seconds }], this.#response, times);
    if (this.#shapes.size >= MOST_SHAPES) this.#shapes.clear();
    this.#shapes.set(key, made);
    return made;
  }
}
