/** The worker's process: ends in order when its parent asks, or when the parent is gone. */
process.on('disconnect', () => process.emit('SIGTERM'));
await import('../build/jobs/worker.js');
