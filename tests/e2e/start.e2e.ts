/** `scripts/serve.mjs` as a person meets it: one sentence for what is wrong, a clean stop, data kept, recovery. */
import { spawn, type ChildProcess } from 'node:child_process';
import { chmodSync, mkdtempSync, readFileSync, rmSync } from 'node:fs';
import { createServer } from 'node:net';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { expect, test } from '@playwright/test';
import { freePort, stopDatabase } from '../../scripts/pg.mjs';
import { signUp } from './support/app';

interface Started {
  child: ChildProcess;
  said: () => string;
  ended: Promise<number | null>;
}

/** Starts Ebbline on a data folder of the test's own, without the database of the other tests. */
function start(folder: string, port: number | string): Started {
  const { DATABASE_URL: _url, DATABASE_OWNER_URL: _owner, ORIGIN: _origin, ...rest } = process.env;
  const env = { ...rest, PORT: String(port), DATA_DIR: folder, NODE_ENV: 'production' };
  const child = spawn(process.execPath, ['scripts/serve.mjs'], { env, stdio: ['ignore', 'pipe', 'pipe'] });
  let text = '';
  child.stdout.on('data', (part) => (text += part));
  child.stderr.on('data', (part) => (text += part));
  const ended = new Promise<number | null>((done) => child.once('exit', (code) => done(code)));
  return { child, said: () => text, ended };
}
const untilReady = (started: Started) =>
  expect.poll(started.said, { timeout: 60_000 }).toContain('Ebbline is ready');

/** Whether the PostgreSQL of a data folder runs, by its lock file and the process it names. */
function isDatabaseUp(folder: string): boolean {
  try {
    const { cluster } = JSON.parse(readFileSync(join(folder, 'database.json'), 'utf8')) as {
      cluster: string;
    };
    const pid = readFileSync(join(cluster, 'postmaster.pid'), 'utf8').split('\n')[0];
    return !readFileSync(`/proc/${pid}/stat`, 'utf8').includes(') Z ');
  } catch {
    return false;
  }
}

/** Processes whose parent is `pid`. */
function childrenOf(pid: number): number[] {
  return readFileSync(`/proc/${pid}/task/${pid}/children`, 'utf8').split(' ').filter(Boolean).map(Number);
}
const isAlive = (pid: number): boolean => {
  try {
    return !readFileSync(`/proc/${pid}/stat`, 'utf8').includes(') Z ');
  } catch {
    return false;
  }
};

test.describe.configure({ mode: 'serial' });
test.setTimeout(180_000);

let folder: string;
test.beforeAll(() => {
  folder = mkdtempSync(join(tmpdir(), 'ebbline-start-'));
  chmodSync(folder, 0o755);
});
test.afterAll(() => {
  stopDatabase(folder);
  rmSync(folder, { recursive: true, force: true });
});

test('a taken port and a port that is none are told in one sentence', async () => {
  const port = await freePort();
  const other = createServer().listen(port, '127.0.0.1');
  const taken = start(folder, port);
  expect(await taken.ended).toBe(1);
  expect(taken.said().trim().split('\n')).toHaveLength(1);
  expect(taken.said()).toContain(`Port ${port} on 127.0.0.1 is taken by another program`);
  other.close();
  const none = start(folder, '80x');
  expect(await none.ended).toBe(1);
  expect(none.said().trim()).toBe(
    'PORT is "80x"; it must be a whole number from 1 to 65535, as in PORT=3000 npm start.'
  );
});

test('INT, TERM and HUP stop application, worker and database; data are kept', async ({ browser }) => {
  const port = await freePort();
  const baseURL = `http://127.0.0.1:${port}`;
  const first = start(folder, port);
  await untilReady(first);
  const context = await browser.newContext({ baseURL });
  const page = await context.newPage();
  const person = await signUp(page);
  const workers = childrenOf(first.child.pid!);
  expect(workers).toHaveLength(1);
  expect(isDatabaseUp(folder)).toBe(true);
  first.child.kill('SIGINT');
  await first.ended;
  expect(isDatabaseUp(folder)).toBe(false);
  expect(workers.some(isAlive)).toBe(false);

  for (const signal of ['SIGTERM', 'SIGHUP'] as const) {
    const again = start(folder, port);
    await untilReady(again);
    // The session, and with it the account, came through.
    await page.goto('/account');
    await expect(page.getByText(person.email)).toBeVisible();
    again.child.kill(signal);
    await again.ended;
    expect(isDatabaseUp(folder), signal).toBe(false);
  }
  await context.close();
});

test('after the server was killed the next start takes over, and stops everything again', async () => {
  const port = await freePort();
  const first = start(folder, port);
  await untilReady(first);
  const workers = childrenOf(first.child.pid!);
  first.child.kill('SIGKILL');
  await first.ended;
  // The worker notices that its parent is gone; the database waits for the next start.
  await expect.poll(() => workers.some(isAlive), { timeout: 30_000 }).toBe(false);
  expect(isDatabaseUp(folder)).toBe(true);
  const next = start(folder, port);
  await untilReady(next);
  next.child.kill('SIGTERM');
  await next.ended;
  expect(isDatabaseUp(folder)).toBe(false);
});

test('localhost leads to the address that forms are accepted from', async ({ browser }) => {
  const port = await freePort();
  const running = start(folder, port);
  await untilReady(running);
  const context = await browser.newContext();
  const page = await context.newPage();
  await page.goto(`http://localhost:${port}/sign-in`);
  expect(new URL(page.url()).host).toBe(`127.0.0.1:${port}`);
  await context.close();
  running.child.kill('SIGTERM');
  await running.ended;
});
