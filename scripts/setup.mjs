/**
 * Makes a fresh copy ready: packages, PostgreSQL, Chromium (for tests), the build. Each step is done only when it is
 * needed. Node's own modules only, for it runs before packages exist.   node scripts/setup.mjs start|test|build
 */
import { spawnSync } from 'node:child_process';
import { createHash } from 'node:crypto';
import { existsSync, mkdirSync, readFileSync, readdirSync, rmSync, writeFileSync } from 'node:fs';
import { dirname, join, resolve } from 'node:path';
import { fileURLToPath } from 'node:url';
import { installPackages } from './apt.mjs';
import { hasPostgres } from './pg-binaries.mjs';
import { checkDataOwner } from './pg.mjs';
import { nameOfUser, ownerOf, PlainError } from './system.mjs';

const project = resolve(dirname(fileURLToPath(import.meta.url)), '..');
process.chdir(project);
const goal = process.argv[2] ?? 'start';
const OLDEST_NODE = [20, 19];

try {
  checkNode();
  checkDataOwner();
  checkWritable();
  installModules();
  const missing = [];
  if (!process.env.DATABASE_URL && !hasPostgres()) missing.push('postgresql');
  if (goal === 'test' && !existsSync(process.env.CHROMIUM || '/usr/bin/chromium')) missing.push('chromium');
  if (missing.length) installPackages(missing);
  try {
    build();
  } catch (error) {
    // For tests a build that fails is a failed test, counted by test.mjs with all the others.
    if (goal !== 'test') throw error;
    console.error(error.message);
  }
} catch (error) {
  console.error(error instanceof PlainError ? error.message : error);
  process.exit(1);
}

function checkNode() {
  const [major, minor] = process.versions.node.split('.').map(Number);
  if (major > OLDEST_NODE[0] || (major === OLDEST_NODE[0] && minor >= OLDEST_NODE[1])) return;
  throw new PlainError(
    `Ebbline needs Node ${OLDEST_NODE.join('.')} or newer, and this is ${process.version}.`
  );
}

/** Packages and the build are written here: say so at once when they belong to somebody else. */
function checkWritable() {
  if (process.getuid() === 0) return;
  for (const folder of ['.', 'node_modules', 'build', '.svelte-kit']) {
    const owner = ownerOf(folder);
    if (owner === null || owner === process.getuid()) continue;
    throw new PlainError(
      `${join(project, folder)} belongs to the user ${nameOfUser(owner)}, and you are ${nameOfUser(process.getuid())}: ` +
        `start Ebbline as ${nameOfUser(owner)}, or make a copy of your own.`
    );
  }
}

/** Runs a step and says how long it took; what it printed is shown only when it fails. */
function run(words, command, args) {
  const began = Date.now();
  console.log(`${words} ...`);
  const env = { ...process.env };
  // A parent npm exports its own settings; drop those that could change what a child npm does.
  for (const name of ['NODE_ENV', 'npm_config_omit', 'npm_config_global', 'npm_config_prefix'])
    delete env[name];
  const done = spawnSync(command, args, {
    stdio: ['ignore', 'pipe', 'pipe'],
    encoding: 'utf8',
    maxBuffer: 1 << 28,
    env
  });
  if (done.status !== 0) {
    console.error(`${done.stdout ?? ''}${done.stderr ?? ''}`.trim());
    throw new PlainError(
      `${words} failed: ${command} ${args.join(' ')} ended with ${done.error ?? done.status}.`
    );
  }
  console.log(`${words}: ${((Date.now() - began) / 1000).toFixed(1)} s`);
}

/** `npm ci`, when the lock file or Node changed since the last one. */
function installModules() {
  const stamp = 'node_modules/.setup-stamp';
  const want = hashOf(['package-lock.json']) + process.version;
  if (existsSync(stamp) && readFileSync(stamp, 'utf8') === want) return;
  run('Installing packages', 'npm', ['ci', '--include=dev', '--no-audit', '--no-fund', '--loglevel=error']);
  writeFileSync(stamp, want);
}

/** Builds when the content of anything the build reads has changed. */
function build() {
  const stamp = 'build/.setup-stamp';
  const want = hashOf(sources()) + process.version;
  const whole = existsSync('build/index.js') && existsSync('build/jobs/worker.js');
  if (whole && existsSync(stamp) && readFileSync(stamp, 'utf8') === want) return;
  rmSync(stamp, { force: true }); // a build that fails half-way must not look like a good one
  run('Building', 'npm', ['run', 'build', '--silent']);
  mkdirSync('build', { recursive: true });
  writeFileSync(stamp, want);
}

function sources() {
  const configs = readdirSync('.').filter(
    (name) =>
      // The bench's own results change nothing that is built.
      name !== 'bench-results.json' && /\.(config\.[jt]s|json)$|^knexfile\.ts$|^\.npmrc$/.test(name)
  );
  return [...configs, ...['src', 'migrations', 'static', 'scripts'].flatMap(filesIn)];
}

function filesIn(folder) {
  if (!existsSync(folder)) return [];
  return readdirSync(folder, { recursive: true, withFileTypes: true })
    .filter((entry) => entry.isFile())
    .map((entry) => join(entry.parentPath ?? entry.path, entry.name));
}

function hashOf(files) {
  const hash = createHash('sha256');
  for (const file of [...files].sort()) hash.update(`${file}\0`).update(readFileSync(file)).update('\0');
  return hash.digest('hex');
}
