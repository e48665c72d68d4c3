import { expect, it } from 'vitest';
import { openQueue } from '$lib/server/jobs/queue';
import { useDatabase } from './support/database';

const t = useDatabase();

/** What a database that was killed and started again leaves of its connections. */
const cutAll = () =>
  t.owner.raw(
    `select pg_terminate_backend(pid) from pg_stat_activity
     where datname = current_database() and pid <> pg_backend_pid() and usename <> current_user`
  );

it('the application goes on after the database cut its connections', async () => {
  await Promise.all(Array.from({ length: 5 }, () => t.db.raw('select pg_sleep(0.05)')));
  for (let round = 0; round < 3; round++) {
    await cutAll();
    await new Promise((done) => setTimeout(done, 200));
    expect((await t.db.raw('select 1 as one')).rows).toEqual([{ one: 1 }]);
  }
});

it('so does the job queue', async () => {
  const queue = await openQueue(t.url);
  try {
    await queue.createQueue('after');
    const done = new Promise((resolve) => {
      void queue.work('after', { pollingIntervalSeconds: 0.5 }, async ([job]) => resolve(job!.data));
    });
    await cutAll();
    await new Promise((wait) => setTimeout(wait, 700));
    await queue.send('after', { all: 'well' });
    expect(await done).toEqual({ all: 'well' });
  } finally {
    await queue.stop({ graceful: false });
  }
});
