/// <reference lib="webworker" />
import type { FromWorker, ToWorker } from './protocol';
import { runSearch } from './run-search';

let isStopped = false;
addEventListener('message', ({ data }: MessageEvent<ToWorker>) => {
  if (data.type === 'stop') isStopped = true;
  else
    void runSearch(
      data,
      (message: FromWorker) => postMessage(message),
      () => isStopped
    );
});
