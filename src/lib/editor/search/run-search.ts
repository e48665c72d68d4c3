/** One search in slices: works, reports, lets a stop come in between. Knows no worker, so that tests run it as it is. */
import { Search } from '$lib/engine/search';
import { withResponse } from './problem';
import type { FromWorker, ToWorker } from './protocol';

/** Milliseconds of one slice: short enough for a stop to feel instant. */
const SLICE = 80;
/** Iterations of one slice where the budget is a number of them. */
const PIECE = 2000;
/** Seconds between reports. */
const REPORT = 0.25;

export async function runSearch(
  start: Extract<ToWorker, { type: 'start' }>,
  report: (message: FromWorker) => void,
  isStopped: () => boolean,
  pause: () => Promise<void> = () => new Promise((resolve) => setTimeout(resolve)),
  now: () => number = () => performance.now()
): Promise<void> {
  try {
    const search = new Search(withResponse(start.problem), start.seed, { presentScore: start.presentScore });
    const { budget } = start;
    const from = now();
    const elapsed = () => (now() - from) / 1000;
    let reported = -Infinity;
    let progress = search.progress();
    for (;;) {
      const isOver =
        'seconds' in budget ? elapsed() >= budget.seconds : progress.iterations >= budget.iterations;
      if (isOver || isStopped()) {
        report({ type: 'done', progress, best: search.best(), elapsed: elapsed(), stopped: !isOver });
        return;
      }
      progress = search.step(
        'seconds' in budget
          ? { milliseconds: SLICE }
          : { iterations: Math.min(PIECE, budget.iterations - progress.iterations) }
      );
      if (elapsed() - reported >= REPORT) {
        reported = elapsed();
        report({ type: 'progress', progress, best: search.best(), elapsed: reported });
      }
      await pause();
    }
  } catch (error) {
    report({ type: 'failed', message: error instanceof Error ? error.message : String(error) });
  }
}
