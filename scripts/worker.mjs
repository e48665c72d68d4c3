/** The worker's process: ends in order when its parent asks, or when the parent is gone. */
const LAST_MOMENTS = 5000;
function leave() {
  // Nobody is left to end a worker that hangs.
  setTimeout(() => process.exit(1), LAST_MOMENTS);
  // While it still loads nobody listens, and there is nothing to bring in order.
  if (!process.emit('SIGTERM')) process.exit(0);
}
process.on('disconnect', leave);
// The parent may have gone before this line ran; then no event comes any more.
if (process.connected === false) process.exit(0);
await import('../build/jobs/worker.js');
