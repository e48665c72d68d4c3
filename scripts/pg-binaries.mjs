/** Which PostgreSQL programs to use: those that fit the data folder, not simply the newest. */
import { existsSync, readFileSync, readdirSync } from 'node:fs';
import { join } from 'node:path';
import { PlainError } from './system.mjs';

const base = '/usr/lib/postgresql';

/** Major versions with a server on this machine, newest first. */
export function installedVersions() {
  if (!existsSync(base)) return [];
  return readdirSync(base)
    .filter((version) => existsSync(join(base, version, 'bin', 'initdb')))
    .sort((a, b) => Number(b) - Number(a));
}

/** True when some PostgreSQL server is there; PG_BIN may name its folder. */
export const hasPostgres = () => Boolean(process.env.PG_BIN) || installedVersions().length > 0;

/** Major version that wrote a cluster; throws a plain sentence when that version is not installed. */
export function clusterVersion(cluster) {
  const version = readFileSync(join(cluster, 'PG_VERSION'), 'utf8').trim();
  if (!process.env.PG_BIN && !installedVersions().includes(version))
    throw new PlainError(
      `The database in ${cluster} was written by PostgreSQL ${version}, and this machine has ` +
        `${installedVersions().join(', ') || 'none'}: install postgresql-${version}, or move the folder away to start empty.`
    );
  return version;
}

/** Folder with the programs for a cluster; without one, the newest installed. */
export function findBinaries(cluster) {
  if (process.env.PG_BIN) return process.env.PG_BIN;
  const version =
    cluster && existsSync(join(cluster, 'PG_VERSION')) ? clusterVersion(cluster) : installedVersions()[0];
  if (!version) throw new PlainError('PostgreSQL is not installed: run apt-get install postgresql as root.');
  return join(base, version, 'bin');
}
