/** A search as the page sees it: started, watched, stopped. It goes on while other pages of the task are open. */
import type { Candidate, Progress } from '$lib/engine/search';
import type { Kind } from './kinds';
import { makeSearchWorker } from './make-worker';
import type { PlainProblem } from './problem';
import type { Budget, FromWorker, ToWorker } from './protocol';

export interface Started {
  runId: string;
  problem: PlainProblem;
  kinds: Kind[];
  contrasts: { id: string; name: string }[];
  seed: string;
  budget: Budget;
  present: { score: number; perContrast: number[] };
  /** The document's run when the search began, for comparison. */
  presentTrials: { card: string; onset: number }[];
}

export class SearchSession {
  state: 'idle' | 'searching' | 'done' | 'failed' = $state('idle');
  started: Started | null = $state.raw(null);
  progress: Progress | null = $state.raw(null);
  best: Candidate | null = $state.raw(null);
  /** Seconds of work. */
  elapsed = $state(0);
  wasStopped = $state(false);
  failure = $state('');
  #worker: Worker | null = null;

  start(what: Started): void {
    this.close();
    this.started = what;
    this.progress = null;
    this.best = null;
    this.elapsed = 0;
    this.wasStopped = false;
    this.state = 'searching';
    const worker = makeSearchWorker();
    this.#worker = worker;
    worker.onmessage = ({ data }: MessageEvent<FromWorker>) => this.#hear(data);
    worker.onerror = () =>
      this.#hear({
        type: 'failed',
        message: 'The search could not be started in this browser; reload the page.'
      });
    const message: ToWorker = {
      type: 'start',
      problem: what.problem,
      seed: what.seed,
      presentScore: what.present.score,
      budget: what.budget
    };
    worker.postMessage(message);
  }

  stop(): void {
    const message: ToWorker = { type: 'stop' };
    this.#worker?.postMessage(message);
  }

  close(): void {
    this.#worker?.terminate();
    this.#worker = null;
    if (this.state === 'searching') this.state = this.best ? 'done' : 'idle';
  }

  /** Part of the budget that is used up, 0 to 1. */
  get share(): number {
    const budget = this.started?.budget;
    if (!budget) return 0;
    const used =
      'seconds' in budget
        ? this.elapsed / budget.seconds
        : (this.progress?.iterations ?? 0) / budget.iterations;
    return Math.min(1, used);
  }

  get designsPerSecond(): number {
    return this.elapsed > 0 ? (this.progress?.designs ?? 0) / this.elapsed : 0;
  }

  /** Seconds until the budget is used up, by the pace so far; null before there is one. */
  get left(): number | null {
    const budget = this.started?.budget;
    if (!budget || this.share === 0) return null;
    if ('seconds' in budget) return Math.max(0, budget.seconds - this.elapsed);
    return (this.elapsed / this.share) * (1 - this.share);
  }

  #hear(message: FromWorker): void {
    if (message.type === 'failed') {
      this.failure = message.message;
      this.state = 'failed';
      this.close();
      return;
    }
    this.progress = message.progress;
    this.best = message.best;
    this.elapsed = message.elapsed;
    if (message.type === 'done') {
      this.wasStopped = message.stopped;
      this.state = 'done';
      this.close();
    }
  }
}

const sessions = new WeakMap<object, SearchSession>();

/** The session that belongs to an editor; one for as long as the task is open. */
export function sessionOf(editor: object): SearchSession {
  const session = sessions.get(editor) ?? new SearchSession();
  sessions.set(editor, session);
  return session;
}
