import { mkdirSync, mkdtempSync, readdirSync, utimesSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import { clean, REHEARSALS_KEPT } from '$lib/server/jobs/clean';
import { openQueue } from '$lib/server/jobs/queue';
import { useDatabase } from './support/database';
import { labWithRoles } from './support/people';

const t = useDatabase();

describe('tidying', () => {
  it('removes what has ended and nothing else', async () => {
    const { lab, people, task } = await labWithRoles(t.db);
    const day = (n: number) => new Date(Date.now() + n * 24 * 3600 * 1000);
    await t.db('sessions').insert([
      { id: 'ended', user_id: people.owner.id, expires_at: day(-1) },
      { id: 'runs', user_id: people.owner.id, expires_at: day(1) }
    ]);
    await t.db('sign_in_attempts').insert([
      { account: 'a', address: 'x', at: day(-2) },
      { account: 'b', address: 'x', at: day(0) }
    ]);
    await t.db('rehearsals').insert(
      Array.from({ length: REHEARSALS_KEPT + 3 }, (_, n) => ({
        lab_id: lab.id,
        task_id: task.id,
        save_number: 1,
        run_id: `run${n}`,
        report: {},
        created_at: day(n)
      }))
    );
    const folder = mkdtempSync(join(tmpdir(), 'ebbline-uploads-'));
    mkdirSync(folder, { recursive: true });
    for (const name of ['old', 'new']) writeFileSync(join(folder, name), 'x');
    utimesSync(join(folder, 'old'), day(-2), day(-2));

    expect(await clean(t.db, folder)).toEqual({ sessions: 1, attempts: 1, rehearsals: 3, uploads: 1 });
    expect((await t.db('sessions').select('id')).map((r) => r.id)).toEqual(['runs']);
    expect((await t.db('sign_in_attempts').select('account')).map((r) => r.account)).toEqual(['b']);
    const kept = (await t.db('rehearsals').select('run_id')).map((r) => r.run_id);
    expect(kept).toHaveLength(REHEARSALS_KEPT);
    expect(kept).not.toContain('run2');
    expect(readdirSync(folder)).toEqual(['new']);
  });
});

describe('the queue', () => {
  it('works as the application’s role, in its own schema', async () => {
    const queue = await openQueue(t.url);
    try {
      await queue.createQueue('try');
      const done = new Promise((resolve) => {
        void queue.work('try', { pollingIntervalSeconds: 0.5 }, async ([job]) => resolve(job!.data));
      });
      await queue.send('try', { question: 'high or low?' });
      expect(await done).toEqual({ question: 'high or low?' });
    } finally {
      await queue.stop({ graceful: false });
    }
  });
});
