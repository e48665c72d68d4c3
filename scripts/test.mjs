/**
 * Runs every check in order and ends with one plain line, `N passed, N failed`. A step such as lint counts as one
 * test; the runners' own tests are counted by their reports. A skipped test counts as failed: nothing is left out
 * quietly.   node scripts/test.mjs [long]
 */
import { spawn } from 'node:child_process';
import { mkdirSync, readFileSync, rmSync } from 'node:fs';
import { dirname, resolve } from 'node:path';
import { fileURLToPath } from 'node:url';
import { countPlaywright, countVitest } from './test-counts.mjs';

process.chdir(resolve(dirname(fileURLToPath(import.meta.url)), '..'));
const reports = 'test-results/reports';
const minutes = 60_000;
/** Kept apart from test-results, which Playwright empties. */
rmSync(reports, { recursive: true, force: true });

let current = null;
let stopped = false;
for (const signal of ['SIGINT', 'SIGTERM', 'SIGHUP'])
  process.on(signal, () => {
    stopped = true;
    current?.kill('SIGTERM');
  });

/** Runs a command; resolves to its exit code, 1 when it was stopped or took too long. */
function run(command, args, { env = {}, limit = 20 * minutes } = {}) {
  return new Promise((done) => {
    current = spawn(command, args, { stdio: 'inherit', env: { ...process.env, ...env } });
    const timer = setTimeout(() => {
      console.error(`Stopped after ${limit / minutes} minutes.`);
      current.kill('SIGTERM');
    }, limit);
    const end = (code) => {
      clearTimeout(timer);
      done(code ?? 1);
    };
    current.once('error', (error) => {
      console.error(error.message);
      end(1);
    });
    current.once('exit', (code) => end(code));
  });
}

const single = (code) => ({ passed: code === 0 ? 1 : 0, failed: code === 0 ? 0 : 1 });
const bin = (name) => `node_modules/.bin/${name}`;

/** The JSON report a runner wrote, or null. */
function readReport(file) {
  try {
    return JSON.parse(readFileSync(file, 'utf8'));
  } catch {
    return null;
  }
}

async function vitest(project) {
  const file = `${reports}/vitest-${project}.json`;
  const code = await run(bin('vitest'), [
    ...['run', '--project', project, '--passWithNoTests'],
    ...['--reporter=default', '--reporter=json', `--outputFile.json=${file}`]
  ]);
  return countVitest(readReport(file), code);
}

async function playwright(project, more = []) {
  const file = resolve(reports, `playwright-${project}.json`);
  const code = await run(
    bin('playwright'),
    ['test', '--project', project, '--pass-with-no-tests', '--reporter=list,json', ...more],
    { env: { PLAYWRIGHT_JSON_OUTPUT_NAME: file, NODE_ENV: 'production' }, limit: 30 * minutes }
  );
  return countPlaywright(readReport(file), code);
}

let isBuilt = false;
const steps = {
  short: [
    ['rooms', async () => single(await run('node', ['scripts/check-rooms.mjs']))],
    ['lint', async () => single(await run(bin('eslint'), ['.', '--max-warnings', '0']))],
    ['format', async () => single(await run(bin('prettier'), ['--check', '--log-level', 'warn', '.']))],
    ['types', async () => single(await run('npm', ['run', 'check', '--silent']))],
    ['unit tests', () => vitest('unit')],
    ['database tests', () => vitest('db')],
    [
      'build',
      async () => {
        const code = await run('node', ['scripts/setup.mjs', 'build']);
        isBuilt = code === 0;
        return single(code);
      }
    ],
    ['browser tests', () => (isBuilt ? playwright('app') : single(1))],
    // Last and alone: nothing else may take the processor while onsets are measured.
    ['real-time tests', () => (isBuilt ? playwright('realtime', ['--workers=1']) : single(1))]
  ],
  long: [['long tests', () => vitest('long')]]
};

mkdirSync(reports, { recursive: true });
const total = { passed: 0, failed: 0 };
const lines = [];
for (const [name, step] of steps[process.argv[2] === 'long' ? 'long' : 'short']) {
  if (stopped) break;
  console.log(`\n== ${name}`);
  const began = Date.now();
  const { passed, failed } = await step();
  total.passed += passed;
  total.failed += failed;
  const seconds = ((Date.now() - began) / 1000).toFixed(1).padStart(6);
  lines.push(
    `${failed ? 'FAIL' : 'ok  '} ${name.padEnd(18)} ${seconds} s   ${passed} passed, ${failed} failed`
  );
}
if (stopped) total.failed += 1;
console.log(`\n${lines.join('\n')}${stopped ? '\nStopped before the end.' : ''}\n`);
console.log(`${total.passed} passed, ${total.failed} failed`);
process.exitCode = total.failed || !total.passed ? 1 : 0;
