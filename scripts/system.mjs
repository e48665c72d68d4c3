/** Small facts about this machine and its users. Node's own modules only: setup.mjs needs them before packages exist. */
import { execFileSync, spawnSync } from 'node:child_process';
import { chmodSync, chownSync, readFileSync, renameSync, statSync, writeFileSync } from 'node:fs';

/** An error whose message is the whole explanation: print it without a stack. */
export class PlainError extends Error {}

export const isRoot = process.getuid?.() === 0;

/** User id that owns a path, or null when there is no such path. */
export function ownerOf(path) {
  try {
    return statSync(path).uid;
  } catch (error) {
    if (error.code === 'ENOENT') return null;
    throw error;
  }
}

export function nameOfUser(uid) {
  const line = readFileSync('/etc/passwd', 'utf8')
    .split('\n')
    .find((entry) => entry.split(':')[2] === String(uid));
  return line ? line.split(':')[0] : `number ${uid}`;
}

/** As root, the ids of `postgres` (PostgreSQL refuses to run as root); for others null: they run it themselves. */
export function databaseUserIds() {
  if (!isRoot) return null;
  const [uid, gid] = ['-u', '-g'].map((flag) =>
    Number(execFileSync('id', [flag, 'postgres'], { encoding: 'utf8' }))
  );
  return { uid, gid, own: (path) => chownSync(path, uid, gid) };
}

/** Runs a program of PostgreSQL as the user who may run it. */
export function asDatabaseUser(command, args, options = {}) {
  const all = { encoding: 'utf8', cwd: '/', stdio: ['ignore', 'pipe', 'pipe'], ...options };
  return isRoot
    ? spawnSync('runuser', ['-u', 'postgres', '--', command, ...args], all)
    : spawnSync(command, args, all);
}

/** Whether the user who runs PostgreSQL can pass through a folder (every parent must let it). */
export const canDatabaseUserEnter = (folder) => asDatabaseUser('test', ['-x', folder]).status === 0;

/** Writes a file only its owner can read, in one step: a reader never sees half of it. */
export function writeSecret(file, text, ids = null) {
  const part = `${file}.part`;
  writeFileSync(part, text, { mode: 0o600 });
  chmodSync(part, 0o600);
  if (ids) ids.own(part);
  renameSync(part, file);
}

/** The last words of a log, on one line. */
export const tailOf = (text, lines = 3) => String(text).trim().split('\n').slice(-lines).join(' | ');

/** A mark that tells one process from a later one with the same number: its id and its start time. */
export const processMark = {
  of(pid) {
    try {
      const stat = readFileSync(`/proc/${pid}/stat`, 'utf8');
      const fields = stat.slice(stat.lastIndexOf(')') + 2).split(' ');
      return fields[0] === 'Z' ? null : `${pid}:${fields[19]}`;
    } catch {
      return null;
    }
  },
  own: () => processMark.of(process.pid),
  isAlive: (mark) => mark !== null && processMark.of(String(mark).split(':')[0]) === mark
};
