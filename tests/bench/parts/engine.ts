/**
 * The engine beside a plain rebuild of the same numbers: convolve on a fine grid, whiten with a dense matrix, invert.
 * Both are checked to agree before anything is timed.
 */
import { join } from 'node:path';
import { setFlagsFromString } from 'node:v8';
import { runInNewContext } from 'node:vm';
import { chromium } from 'playwright';
import { bundleModule } from '../../../scripts/vite-plugin-bundle';
import { curveTimes } from '../../../src/lib/engine/convolution/curve';
import type { DesignEvent } from '../../../src/lib/engine/convolution/event';
import { IncrementalRegressor } from '../../../src/lib/engine/convolution/incremental';
import { volumeTimes } from '../../../src/lib/engine/convolution/times';
import { detectionColumns } from '../../../src/lib/engine/design/columns';
import { designReport } from '../../../src/lib/engine/design/report';
import { seeded } from '../../../src/lib/engine/random';
import { doubleGamma } from '../../../src/lib/engine/response/double-gamma';
import type { BenchPart, BenchRow } from '../types';
import { designBits, type PageFigures } from './engine-page';
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

/** The preview measured in a page, and how many bits of a design come out differently there. */
async function inChromium(): Promise<PageFigures & { differing: number }> {
  const root = join(import.meta.dirname, '../../..');
  const { code } = await bundleModule(join(import.meta.dirname, 'engine-page.ts'), 'iife', root);
  const browser = await chromium.launch({
    executablePath: process.env.CHROMIUM || '/usr/bin/chromium',
    args: ['--no-sandbox', '--disable-gpu', '--no-first-run', '--disable-background-networking']
  });
  try {
    const page = await browser.newPage();
    await page.setContent('<svg width="1200" height="60"><path fill="none" stroke="black"/></svg>');
    await page.addScriptTag({ content: code });
    await page.evaluate('measure(document.querySelector("path"), 100)');
    const figures = await page.evaluate<PageFigures>('measure(document.querySelector("path"), 1000)');
    const theirs = await page.evaluate<string>('designBits()');
    return { ...figures, differing: bitsApart(designBits(), theirs) };
  } finally {
    await browser.close();
  }
}

function bitsApart(a: string, b: string): number {
  if (a.length !== b.length) return Infinity;
  let apart = 0;
  for (let i = 0; i < a.length; i += 1) {
    const change = parseInt(a[i]!, 16) ^ parseInt(b[i]!, 16);
    apart += change.toString(2).replaceAll('0', '').length;
  }
  return apart;
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

  const page = await inChromium();
  const sorted = [...page.previews].sort((a, b) => a - b);
  const at = (share: number) => sorted[Math.floor(share * (sorted.length - 1))]!;
  const rebuild = page.rebuilds.sort((a, b) => a - b)[Math.floor(page.rebuilds.length / 2)]!;
  row('Chromium: preview of one move, 200 trials, 600 s, median', at(0.5), 'ms', {
    aim: 4,
    against: { name: 'convolution on a 0.1 s grid', value: rebuild }
  });
  row('Chromium: … 99th percentile', at(0.99), 'ms', { aim: 16 });
  const signal = page.signals.sort((a, b) => a - b)[Math.floor(page.signals.length / 2)]!;
  // Like beside like: moving the trial in curve and column, against convolving them anew.
  row('Chromium: … its signal alone, times faster than that convolution', rebuild / signal, '×', {
    aim: 20,
    better: 'higher'
  });
  row(
    'Chromium: … with numbers and drawing, times faster than that convolution alone',
    rebuild / at(0.5),
    '×',
    {
      better: 'higher'
    }
  );
  row('bits of a design that differ between Node and Chromium', page.differing, 'bits', { aim: 0 });
  return rows;
}

export default { name: 'engine', run: engineBench } satisfies BenchPart;
