/** The textbook way, written as one would at first: the yardstick of the engine's bench. */
import type { DesignEvent } from '../../../src/lib/engine/convolution/event';
import type { Response } from '../../../src/lib/engine/response/response';

export interface PlainDesign {
  tr: number;
  volumes: number;
  /** Brief events on the grid, condition by condition. */
  conditions: DesignEvent[][];
  response: Response;
  cutoff: number;
  rho: number;
}

/** Seconds. */
export const GRID = 0.1;

/** A stick for each event, convolved with the sampled response: one value per grid point. */
export function convolveOnGrid(
  events: readonly DesignEvent[],
  response: Response,
  end: number
): Float64Array {
  const length = Math.round(end / GRID) + 1;
  const sticks = new Float64Array(length);
  for (const { onset } of events) sticks[Math.round(onset / GRID)]! += 1;
  const kernel = Float64Array.from({ length: Math.round(response.length / GRID) + 1 }, (_, i) =>
    response.value(i * GRID)
  );
  const out = new Float64Array(length);
  for (let i = 0; i < length; i += 1) {
    let sum = 0;
    const reach = Math.min(kernel.length - 1, i);
    for (let k = 0; k <= reach; k += 1) sum += kernel[k]! * sticks[i - k]!;
    out[i] = sum;
  }
  return out;
}

/** Efficiency of each condition: fine grid, dense whitening, inverse of the whole cross-product matrix. */
export function rebuildPlainly(design: PlainDesign): number[] {
  const { tr, volumes, conditions, response, cutoff, rho } = design;
  const perVolume = Math.round(tr / GRID);
  const x = conditions.map((events) => {
    const fine = convolveOnGrid(events, response, tr * volumes);
    return Array.from(
      { length: volumes },
      (_, n) => fine[n * perVolume + perVolume / 2]! / response.peak.value
    );
  });
  const cosines = Math.floor((2 * volumes * tr) / cutoff);
  for (let k = 0; k <= cosines; k += 1)
    x.push(Array.from({ length: volumes }, (_, i) => Math.cos((Math.PI * k * (2 * i + 1)) / (2 * volumes))));
  const v = Array.from({ length: volumes }, (_, i) =>
    Array.from({ length: volumes }, (_value, j) => rho ** Math.abs(i - j))
  );
  const precision = invert(v);
  const px = x.map((column) =>
    precision.map((row) => row.reduce((sum, value, i) => sum + value * column[i]!, 0))
  );
  const cross = x.map((a) => px.map((b) => a.reduce((sum, value, i) => sum + value * b[i]!, 0)));
  const covariance = invert(cross);
  return conditions.map((_, j) => 1 / covariance[j]![j]!);
}

/** Gauss–Jordan with row pivoting. */
function invert(matrix: readonly (readonly number[])[]): number[][] {
  const size = matrix.length;
  const work = matrix.map((row, i) => [...row, ...Array.from({ length: size }, (_, j) => (i === j ? 1 : 0))]);
  for (let c = 0; c < size; c += 1) {
    let best = c;
    for (let r = c; r < size; r += 1) if (Math.abs(work[r]![c]!) > Math.abs(work[best]![c]!)) best = r;
    [work[c], work[best]] = [work[best]!, work[c]!];
    const top = work[c]!;
    const pivot = top[c]!;
    for (let k = 0; k < 2 * size; k += 1) top[k]! /= pivot;
    for (let r = 0; r < size; r += 1) {
      const row = work[r]!;
      const factor = row[c]!;
      if (r !== c && factor !== 0) for (let k = c; k < 2 * size; k += 1) row[k]! -= factor * top[k]!;
    }
  }
  return work.map((row) => row.slice(size));
}
