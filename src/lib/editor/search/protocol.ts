/** What passes between the page and the search's worker. */
import type { Candidate, Progress } from '$lib/engine/search';
import type { PlainProblem } from './problem';

export type Budget = { seconds: number } | { iterations: number };

export type ToWorker =
  | { type: 'start'; problem: PlainProblem; seed: string; presentScore: number; budget: Budget }
  | { type: 'stop' };

export type FromWorker =
  | { type: 'progress'; progress: Progress; best: Candidate; elapsed: number }
  | { type: 'done'; progress: Progress; best: Candidate; elapsed: number; stopped: boolean }
  | { type: 'failed'; message: string };
