/**
 * The timing search beside a plain rebuild: the same designs scored from running sums and from a design matrix made
 * anew each time. Both are checked to agree before anything is timed.
 */
import { volumeTimes } from '../../../src/lib/engine/convolution/times';
import { individualAndPairs } from '../../../src/lib/engine/design/criteria';
import { doubleGamma } from '../../../src/lib/engine/response/double-gamma';
import { eventsOf, scoreEvents, Search, type SearchProblem } from '../../../src/lib/engine/search';
import type { BenchPart, BenchRow } from '../types';

/** Four conditions, 120 brief trials in 300 volumes of 2 s, onsets every half second, every effect and every pair. */
function usualProblem(): SearchProblem {
  const tr = 2;
  const volumes = 300;
  return {
    rules: {
      lengthSeconds: 600,
      volumes,
      tr,
      grid: tr / 4,
      counts: [30, 30, 30, 30],
      durations: [1, 1, 1, 1],
      gapMin: 1,
      gapMean: 3.5,
      gapMax: 11,
      maxInARow: Infinity,
      leadIn: 0,
      leadOut: 12
    },
    response: doubleGamma(),
    times: volumeTimes({ tr, volumes }),
    highPass: 128,
    noise: { kind: 'ar1', rho: 0.3, rhoTr: 2 },
    contrasts: individualAndPairs(4),
    modelled: [0, 1, 2, 3].map(() => ({ offset: 0, duration: 1 }))
  };
}

/** CPU seconds of this process: steadier than the clock on a shared machine. */
function cpuSeconds(call: () => void): number {
  const before = process.cpuUsage();
  call();
  const { user, system } = process.cpuUsage(before);
  return (user + system) / 1e6;
}

export async function searchBench(): Promise<BenchRow[]> {
  const rows: BenchRow[] = [];
  const row = (name: string, value: number, unit: string, more: Partial<BenchRow> = {}) =>
    rows.push({ part: 'search', name, value, unit, aim: null, better: 'higher', against: null, ...more });

  const problem = usualProblem();
  const rebuilt = (order: number[], onsets: number[]) =>
    scoreEvents(problem, eventsOf(problem, order, onsets)).score;
  const search = new Search(problem, 'bench');
  let apart = 0;
  const designs: { order: number[]; onsets: number[] }[] = [];
  for (let i = 0; i < 40; i += 1) {
    search.step({ iterations: 1500 });
    const { order, onsets, score } = search.underWork();
    apart = Math.max(apart, Math.abs(score / rebuilt(order, onsets) - 1));
    designs.push({ order, onsets });
  }
  row('scores against a rebuilt design, over 60,000 moves', apart, 'relative', {
    aim: 1e-9,
    better: 'lower'
  });

  const plainSeconds = cpuSeconds(() => designs.forEach(({ order, onsets }) => rebuilt(order, onsets)));
  const plainRate = designs.length / plainSeconds;
  const before = search.progress().designs;
  const seconds = cpuSeconds(() => search.step({ iterations: 300_000 }));
  const rate = (search.progress().designs - before) / seconds;
  row('designs per second of one core, Q 4 N 300 n 120', rate, '1/s', {
    against: { name: 'design matrix rebuilt', value: plainRate }
  });
  row('… times as many as by rebuilding', rate / plainRate, '×', { aim: 50 });

  const short = new Search(problem, 'short');
  cpuSeconds(() => short.step({ milliseconds: 1000 }));
  const random = Math.max(
    ...Array.from({ length: 30 }, (_, i) => {
      const { order, onsets } = new Search(problem, `random ${i}`).underWork();
      return rebuilt(order, onsets);
    })
  );
  row('best score after 1 s', short.best().score, 'efficiency', {
    against: { name: 'best of 30 random designs', value: random }
  });
  return rows;
}

export default { name: 'search', run: searchBench } satisfies BenchPart;
