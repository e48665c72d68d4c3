/**
 * The engine beside a plain rebuild of the same numbers: convolve on a fine grid, whiten with a dense matrix, invert.
 * Both are checked to agree before anything is timed.
 */
import { setFlagsFromString } from 'node:v8';
import { runInNewContext } from 'node:vm';
import { curveTimes } from '../../../src/lib/engine/convolution/curve';
import type { DesignEvent } from '../../../src/lib/engine/convolution/event';
import { IncrementalRegressor } from '../../../src/lib/engine/convolution/incremental';
import { volumeTimes } from '../../../src/lib/engine/convolution/times';
import { detectionColumns } from '../../../src/lib/engine/design/columns';
import { designReport } from '../../../src/lib/engine/design/report';
import { seeded } from '../../../src/lib/engine/random';
import { doubleGamma } from '../../../src/lib/engine/response/double-gamma';
import type { BenchPart, BenchRow } from '../types';
import { convolveOnGrid, GRID, rebuildPlainly, type PlainDesign } from './engine-plain';

const h = doubleGamma();

/** Q conditions, n brief events in random order on the 0.1 s grid, N volumes of 2 s. */
function makeDesign(q: number, volumes: number, n: number): PlainDesign {
  const random = seeded(`bench ${q} ${volumes} ${n}`);
  const step = (2 * volumes) / n;
  const conditions: DesignEvent[][] = Array.from({ length: q }, () => []);
  for (let i = 0; i < n; i += 1) {
    const slot = Math.floor((i * step + random.next() * step * 0.6) / GRID);
    conditions[random.int(q)]!.push({ onset: slot / Math.round(1 / GRID), duration: 0 });
  }
  return { tr: 2, volumes, conditions, response: h, cutoff: 128, rho: 0.3 };
}

function throughEngine(design: PlainDesign): number[] {
  const { tr, volumes, conditions, response } = design;
  const list = conditions.map((events, j) => ({ name: `c${j}`, events }));
  const columns = detectionColumns(list, response, volumeTimes({ tr, volumes }));
  const contrasts = list.map(({ name }, j) => ({ name, weights: list.map((_, k) => (j === k ? 1 : 0)) }));
  const noise = { kind: 'ar1', rho: design.rho, rhoTr: tr } as const;
  const report = designReport({ tr, volumes, columns, contrasts, highPass: design.cutoff, noise });
  return report.contrasts.map(({ efficiency }) => efficiency);
}

/** Median milliseconds of a call, after a warm-up. */
function median(call: () => void, repeats: number): number {
  for (let i = 0; i < Math.ceil(repeats / 4); i += 1) call();
  const times = Array.from({ length: repeats }, () => {
    const start = performance.now();
    call();
    return performance.now() - start;
  }).sort((a, b) => a - b);
  return times[Math.floor(times.length / 2)]!;
}

/** Kilobytes taken by one call before anything is collected. */
function kilobytes(call: () => void): number {
  setFlagsFromString('--expose-gc');
  const collect = runInNewContext('gc') as () => void;
  const taken = () => {
    const { heapUsed, arrayBuffers } = process.memoryUsage();
    return heapUsed + arrayBuffers;
  };
  const samples = Array.from({ length: 5 }, () => {
    collect();
    const before = taken();
    call();
    return (taken() - before) / 1024;
  });
  return Math.max(...samples);
}

export async function engineBench(): Promise<BenchRow[]> {
  const rows: BenchRow[] = [];
  const row = (name: string, value: number, unit: string, more: Partial<BenchRow> = {}) =>
    rows.push({ part: 'engine', name, value, unit, aim: null, better: 'lower', against: null, ...more });

  const usual = makeDesign(4, 300, 120);
  const [mine, plain] = [throughEngine(usual), rebuildPlainly(usual)];
  const apart = Math.max(...mine.map((value, j) => Math.abs(value / plain[j]! - 1)));
  row('design numbers against a plain rebuild, Q 4 N 300 n 120', apart, 'relative', { aim: 1e-9 });

  const engineMs = median(() => throughEngine(usual), 200);
  const plainMs = median(() => rebuildPlainly(usual), 7);
  row('design numbers from events, Q 4 N 300 n 120', engineMs, 'ms', {
    aim: 1,
    against: { name: 'plain rebuild', value: plainMs }
  });
  row(
    'memory of one call',
    kilobytes(() => throughEngine(usual)),
    'kB',
    {
      against: { name: 'plain rebuild', value: kilobytes(() => rebuildPlainly(usual)) }
    }
  );
  const grown: [string, PlainDesign][] = [
    ['N doubled (600)', makeDesign(4, 600, 120)],
    ['n doubled (240)', makeDesign(4, 300, 240)],
    ['Q doubled (8)', makeDesign(8, 300, 120)]
  ];
  for (const [name, design] of grown)
    row(`time when ${name}`, median(() => throughEngine(design), 100) / engineMs, '× as long', {
      against: { name: 'plain rebuild', value: median(() => rebuildPlainly(design), 3) / plainMs }
    });

  const many = makeDesign(1, 300, 200).conditions[0]!;
  const grid = curveTimes(0, 600, GRID);
  const line = new IncrementalRegressor(h, grid, 1, many);
  let here: DesignEvent = many[100]!;
  const move = () => {
    const there = { ...here, onset: here.onset > 300 ? here.onset - 7.3 : here.onset + 7.3 };
    line.move(here, there);
    here = there;
  };
  const moveUs = median(move, 500) * 1000;
  const rebuildUs = median(() => convolveOnGrid(many, h, 600), 15) * 1000;
  row('move one of 200 events, curve of 600 s at 0.1 s', moveUs, 'µs', {
    against: { name: 'convolution on the grid', value: rebuildUs }
  });
  row('… times faster than that convolution', rebuildUs / moveUs, '×', { aim: 20, better: 'higher' });
  return rows;
}

export default { name: 'engine', run: engineBench } satisfies BenchPart;
