/** The build finds the worker's script by exactly this form of call. */
export const makeSearchWorker = (): Worker =>
  new Worker(new URL('./search.worker.ts', import.meta.url), { type: 'module' });
