/** The worker's process: takes jobs from the queue until it is asked to stop. */
import { config } from '../config';
import { connect } from '../db/client';
import { clean, CLEAN, CLEAN_AT } from './clean';
import { openQueue } from './queue';

const db = connect(config().databaseUrl, 2);
const queue = await openQueue();
let stopping = false;
async function stop() {
  if (stopping) return;
  stopping = true;
  await queue.stop({ graceful: true, timeout: 2000 });
  await db.destroy();
  process.exit(0);
}
for (const signal of ['SIGTERM', 'SIGINT'] as const) process.on(signal, () => void stop());

await queue.createQueue(CLEAN);
await queue.work(CLEAN, async () => {
  const done = await clean(db, config().uploadFolder);
  console.log(
    `Tidied: ${Object.entries(done)
      .map(([what, n]) => `${n} ${what}`)
      .join(', ')}.`
  );
  return done;
});
await queue.schedule(CLEAN, CLEAN_AT);
// Once at start too: a laptop is seldom on at night.
await queue.send(CLEAN, {}, { singletonKey: 'at-start', singletonHours: 1 });
