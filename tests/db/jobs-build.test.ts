/** The jobs as they are built: run as processes of their own, with nothing but node_modules beside them. */
import { spawn } from 'node:child_process';
import { rmSync } from 'node:fs';
import { join, resolve } from 'node:path';
import { Worker } from 'node:worker_threads';
import { build } from 'vite';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { checkRules, type Candidate, type Progress } from '$lib/engine/search';
import { volumeTimes } from '$lib/engine/convolution/times';
import type { SearchOrder } from '$lib/server/jobs/search-thread';
import { useDatabase } from './support/database';

const t = useDatabase();
const folder = resolve('node_modules/.cache', `ebbline-jobs-${process.pid}`);
beforeAll(async () => {
  await build({ configFile: 'vite.jobs.config.ts', logLevel: 'warn', build: { outDir: folder } });
}, 60_000);
afterAll(() => rmSync(folder, { recursive: true, force: true }));

describe('the worker', () => {
  it('tidies at start, and ends in order when asked to', async () => {
    const { id } = (
      await t.db('users').insert({ email: 'a@marram.example', name: 'A', password_hash: 'x' }).returning('id')
    )[0];
    await t.db('sessions').insert({ id: 'ended', user_id: id, expires_at: new Date(0) });
    const worker = spawn(process.execPath, [join(folder, 'worker.js')], {
      env: { ...process.env, DATABASE_URL: t.url }
    });
    let said = '';
    const tidied = new Promise<void>((done, fail) => {
      worker.stdout.on('data', (chunk) => {
        said += chunk;
        if (said.includes('Tidied')) done();
      });
      worker.stderr.on('data', (chunk) => (said += chunk));
      worker.on('exit', () => fail(new Error(said)));
    });
    await tidied;
    expect(said).toMatch(/Tidied: 1 sessions, 0 attempts/);
    expect(await t.db('sessions')).toHaveLength(0);
    const ended = new Promise((done) => worker.once('exit', (code) => done(code)));
    worker.kill('SIGTERM');
    expect(await ended).toBe(0);
  }, 60_000);
});

describe('the search thread', () => {
  const rules = {
    lengthSeconds: 200,
    volumes: 100,
    tr: 2,
    grid: 0.5,
    counts: [10, 10],
    durations: [1, 1],
    gapMin: 3,
    gapMean: 6,
    gapMax: 14,
    maxInARow: 3,
    leadIn: 4,
    leadOut: 12
  };
  const order: SearchOrder = {
    problem: {
      rules,
      times: Array.from(volumeTimes({ tr: 2, volumes: 100 })),
      highPass: 128,
      noise: { kind: 'white' },
      contrasts: [[1, -1]],
      modelled: [
        { offset: 0, duration: 1 },
        { offset: 0, duration: 1 }
      ]
    },
    seed: 'marram',
    iterations: 60_000
  };
  const run = (stopAt = Infinity) =>
    new Promise<{ progress: Progress[]; candidate: Candidate }>((done, fail) => {
      const thread = new Worker(join(folder, 'search-thread.js'), { workerData: order });
      const progress: Progress[] = [];
      thread.on('error', fail);
      thread.on('message', (message) => {
        if (message.type === 'progress' && progress.push(message.progress) === stopAt)
          thread.postMessage('stop');
        if (message.type === 'done') done({ progress, candidate: message.candidate });
      });
    });

  it('tells how it goes, keeps the rules, and finds the same with the same seed', async () => {
    expect(checkRules(rules)).toEqual({ ok: true });
    const [one, two] = await Promise.all([run(), run()]);
    expect(one.progress.map((p) => p.iterations)).toEqual([20_000, 40_000, 60_000]);
    expect(one.candidate.order).toHaveLength(20);
    expect(one.candidate.score).toBeCloseTo(one.progress.at(-1)!.bestScore, 6);
    expect(two.candidate).toEqual(one.candidate);
  }, 60_000);

  it('stops when told to, with the best so far', async () => {
    const { progress, candidate } = await run(1);
    expect(progress.length).toBeLessThan(3);
    expect(candidate.score).toBeGreaterThan(0);
  }, 60_000);
});
