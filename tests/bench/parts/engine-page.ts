/**
 * What a page does while one trial is dragged, run in Chromium by the engine's bench: the drawn curve and the sampled
 * column move, the design numbers are made anew, the curve is drawn. Also the bits of a design, to be compared with
 * Node's.
 */
import { curveTimes } from '../../../src/lib/engine/convolution/curve';
import type { DesignEvent } from '../../../src/lib/engine/convolution/event';
import { IncrementalRegressor } from '../../../src/lib/engine/convolution/incremental';
import { peakScale } from '../../../src/lib/engine/convolution/peak-scale';
import { volumeTimes } from '../../../src/lib/engine/convolution/times';
import { designReport } from '../../../src/lib/engine/design/report';
import { seeded } from '../../../src/lib/engine/random';
import { doubleGamma } from '../../../src/lib/engine/response/double-gamma';
import { convolveOnGrid, GRID } from './engine-plain';

const h = doubleGamma();
const SECONDS = 600;
const TRIALS = 200;
const CONDITIONS = 4;
const DURATION = 1.5;

export interface PageFigures {
  /** Milliseconds of each preview. */
  previews: number[];
  /** Milliseconds of moving the trial in the drawn curve and the sampled column alone, each a mean over twenty moves. */
  signals: number[];
  /** Milliseconds of rebuilding all four convolutions on the 0.1 s grid. */
  rebuilds: number[];
}

function makeRun() {
  const random = seeded('a run of 200 trials');
  const scale = peakScale(h, DURATION);
  const grid = curveTimes(0, SECONDS, GRID);
  const times = volumeTimes({ tr: 2, volumes: SECONDS / 2 });
  const conditions: DesignEvent[][] = Array.from({ length: CONDITIONS }, () => []);
  for (let i = 0; i < TRIALS; i += 1) {
    const onset = (30 * i + random.int(10)) / 10;
    conditions[random.int(CONDITIONS)]!.push({ onset, duration: DURATION });
  }
  const drawn = conditions.map((events) => new IncrementalRegressor(h, grid, scale, events));
  const sampled = conditions.map((events) => new IncrementalRegressor(h, times, scale, events));
  const numbers = () =>
    designReport({
      tr: 2,
      volumes: times.length,
      columns: sampled.map(({ values }, j) => ({ name: `c${j}`, values })),
      contrasts: conditions.map((_, j) => ({
        name: `c${j}`,
        weights: conditions.map((_value, k) => (j === k ? 1 : 0))
      })),
      highPass: 128,
      noise: { kind: 'ar1', rho: 0.3, rhoTr: 2 }
    });
  return { conditions, drawn, sampled, numbers };
}

/** Every bit of a design's columns and numbers, as hexadecimal. */
export function designBits(): string {
  const { sampled, numbers } = makeRun();
  const { information, contrasts, vif } = numbers();
  const all = Float64Array.from([
    ...sampled.flatMap(({ values }) => [...values]),
    ...information.flat(),
    ...contrasts.map(({ efficiency }) => efficiency),
    ...vif.map(({ value }) => value)
  ]);
  return Array.from(new Uint8Array(all.buffer), (byte) => byte.toString(16).padStart(2, '0')).join('');
}

/** Moves one trial `count` times, drawing into `path`. */
export function measure(
  path: { setAttribute(name: string, value: string): void },
  count: number
): PageFigures {
  const { conditions, drawn, sampled, numbers } = makeRun();
  let here = conditions[0]![20]!;
  const previews: number[] = [];
  for (let i = 0; i < count; i += 1) {
    const there = { ...here, onset: 150 + ((i * 7) % 100) / 10 };
    const start = performance.now();
    drawn[0]!.move(here, there);
    sampled[0]!.move(here, there);
    numbers();
    path.setAttribute('d', pathOf(drawn[0]!.values));
    previews.push(performance.now() - start);
    here = there;
  }
  // A page's clock steps by 0.1 ms: twenty moves are timed at once.
  const signals = Array.from({ length: 40 }, () => {
    const start = performance.now();
    for (let i = 0; i < 20; i += 1) {
      const there = { ...here, onset: 150 + ((i * 7) % 100) / 10 };
      drawn[0]!.move(here, there);
      sampled[0]!.move(here, there);
      here = there;
    }
    return (performance.now() - start) / 20;
  });
  const rebuilds = Array.from({ length: 15 }, () => {
    const start = performance.now();
    for (const events of conditions) convolveOnGrid(events, h, SECONDS);
    return performance.now() - start;
  });
  return { previews, signals, rebuilds };
}

/** One point for every half second of the curve, as on the Page. */
function pathOf(values: Float64Array): string {
  let text = 'M';
  for (let i = 0; i < values.length; i += 5) text += `${i / 5},${Math.round(values[i]! * 4000) / 100} `;
  return text;
}

Object.assign(globalThis, { designBits, measure });
