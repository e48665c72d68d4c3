/**
 * Starts everything Ebbline needs on one machine: its own PostgreSQL (unless DATABASE_URL names another), one worker
 * for jobs, and the built application. INT, TERM and HUP stop all of it.   node scripts/serve.mjs [port]
 */
import { spawn } from 'node:child_process';
import { once } from 'node:events';
import { existsSync } from 'node:fs';
import { dirname, join, resolve } from 'node:path';
import { fileURLToPath } from 'node:url';
import { isPortFree, startDatabase, dataFolder } from './pg.mjs';
import { refuseNewerData } from './newer-data.mjs';
import { PlainError } from './system.mjs';

const project = resolve(dirname(fileURLToPath(import.meta.url)), '..');
process.chdir(project);
const env = process.env;
/** How long the application and the worker may take to finish what they are doing. */
const LAST_MOMENTS = 3000;

let database = null;
let worker = null;
let stopping = false;
let serving = false;

// The last thing this process does, whatever ended it. Synchronous on purpose.
process.on('exit', () => {
  worker?.kill('SIGKILL');
  database?.stop();
});
for (const signal of ['SIGINT', 'SIGTERM', 'SIGHUP'])
  process.on(signal, () => {
    if (!serving)
      stopping = true; // still starting: leave at the next step
    else if (signal === 'SIGHUP') process.emit('SIGTERM'); // a closed terminal; the application knows TERM and INT
    if (!database && !serving) process.exit(0);
  });

try {
  await main();
} catch (error) {
  const plain = error instanceof PlainError || error?.name === 'PlainError';
  console.error(plain ? error.message : error);
  process.exit(1);
}

async function main() {
  const port = readPort(process.argv[2] ?? (env.PORT || '3000'));
  env.HOST ||= '127.0.0.1';
  if (!(await isPortFree(port, env.HOST)))
    throw new PlainError(
      `Port ${port} on ${env.HOST} is taken by another program (perhaps Ebbline runs already): stop that one, or start with another port, as in PORT=${port + 1} npm start.`
    );
  env.PORT = String(port);
  env.ORIGIN ||= `http://${env.HOST === '0.0.0.0' || env.HOST === '::' ? 'localhost' : env.HOST}:${port}`;
  env.SHUTDOWN_TIMEOUT ||= '2';
  // The application refuses what is too large by itself, in words that a browser reads only after it has sent the
  // file: so five times the limit is let through to it, and only more than that is cut off here.
  env.BODY_SIZE_LIMIT ||= String(
    1_000_000 * (1 + Math.max(5 * (Number(env.UPLOAD_LIMIT_MB) || 20), Number(env.DOCUMENT_LIMIT_MB) || 16))
  );
  for (const file of ['build/index.js', 'build/jobs/worker.js'])
    if (!existsSync(file)) throw new PlainError(`${file} is missing: run npm start, or npm run build.`);

  if (!env.DATABASE_URL) {
    database = await startDatabase();
    env.DATABASE_URL = database.url;
    env.DATABASE_OWNER_URL = database.ownerUrl;
  }
  if (stopping) process.exit(0);
  await refuseNewerData(env.DATABASE_OWNER_URL || env.DATABASE_URL, join(project, 'migrations'));

  process.on('sveltekit:shutdown', stopRest);
  const { server } = await import('../build/index.js');
  serving = true;
  if (stopping) return void process.emit('SIGTERM');
  if (!server.server.listening) await once(server.server, 'listening');
  startWorker();
  console.log(`Ebbline is ready: open ${env.ORIGIN} in a browser. Data: ${dataFolder()}. Stop with Ctrl+C.`);
}

function readPort(text) {
  const port = Number(text);
  if (Number.isInteger(port) && port >= 1 && port <= 65_535) return port;
  throw new PlainError(
    `PORT is "${text}"; it must be a whole number from 1 to 65535, as in PORT=3000 npm start.`
  );
}

/** One worker, in a process group of its own, so that Ctrl+C reaches it through us; started again if it dies. */
function startWorker(failures = 0) {
  const began = Date.now();
  worker = spawn(process.execPath, ['scripts/worker.mjs'], {
    stdio: ['ignore', 'inherit', 'inherit', 'ipc'],
    detached: true
  });
  worker.once('exit', (code, signal) => {
    worker = null;
    if (stopping) return;
    const again = Date.now() - began > 60_000 ? 0 : failures + 1;
    const seconds = Math.min(60, 2 ** again);
    console.error(`The worker for jobs ended (${signal ?? code}); it is started again in ${seconds} s.`);
    setTimeout(() => stopping || startWorker(again), seconds * 1000).unref();
  });
}

/** After the application stopped listening: end the worker, then leave. */
function stopRest() {
  stopping = true;
  setTimeout(() => process.exit(0), LAST_MOMENTS).unref();
  if (!worker) return;
  worker.kill('SIGTERM');
  worker.unref();
  worker.channel?.unref();
}
