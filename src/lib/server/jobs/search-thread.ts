/** The timing search in a thread of its own: gets a problem and a seed, tells how it goes, ends when told to. */
import { parentPort, workerData } from 'node:worker_threads';
import { Search, type SearchProblem } from '../../engine/search';
import { RESPONSE } from '../../task/model';

/** What can be sent between threads; the response is the one that predictions are made with. */
export interface SearchOrder {
  problem: Omit<SearchProblem, 'response'>;
  seed: string;
  /** Stop after so many moves proposed. */
  iterations: number;
}

const SLICE = 20_000;
const { problem, seed, iterations } = workerData as SearchOrder;
const search = new Search({ ...problem, response: RESPONSE }, seed);
let stopped = false;
parentPort?.on('message', (message) => (stopped ||= message === 'stop'));

async function run(): Promise<void> {
  for (let done = 0; done < iterations && !stopped; done += SLICE) {
    parentPort?.postMessage({
      type: 'progress',
      progress: search.step({ iterations: Math.min(SLICE, iterations - done) })
    });
    // Let a message in.
    await new Promise(setImmediate);
  }
  parentPort?.postMessage({ type: 'done', candidate: search.best() });
  parentPort?.close();
}
void run();
