/** The worker's process: ends in order when its parent asks, or when the parent is gone. */
process.on('disconnect', () => {
  // While it still loads nobody listens, and there is nothing to bring in order.
  if (!process.emit('SIGTERM')) process.exit(0);
});
await import('../build/jobs/worker.js');
