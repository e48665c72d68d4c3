/** The private PostgreSQL of `npm start`: roles, kept port, recovery, and one clear sentence for what is wrong. */
import {
  chmodSync,
  chownSync,
  mkdirSync,
  mkdtempSync,
  readFileSync,
  rmSync,
  statSync,
  writeFileSync
} from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import pg from 'pg';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { checkDataOwner, startDatabase, type Database } from '../../scripts/pg.mjs';
import { refuseNewerData } from '../../scripts/newer-data.mjs';

let folder: string;
let first: Database;
beforeAll(async () => {
  folder = mkdtempSync(join(tmpdir(), 'ebbline-own-'));
  chmodSync(folder, 0o755);
  first = await startDatabase({ folder, quick: true });
}, 60_000);
afterAll(async () => {
  // Whoever started it last in these tests: this call takes it over only if that process is gone, so stop by ours.
  first.stop();
  rmSync(folder, { recursive: true, force: true });
});

/** Answers of one query through a fresh connection. */
async function ask(url: string, sql: string): Promise<Record<string, unknown>[]> {
  const client = new pg.Client({ connectionString: url });
  client.on('error', () => {});
  await client.connect();
  try {
    return (await client.query(sql)).rows;
  } finally {
    await client.end();
  }
}
const settings = () =>
  JSON.parse(readFileSync(join(folder, 'database.json'), 'utf8')) as { cluster: string; port: number };
const postmaster = () =>
  Number(readFileSync(join(settings().cluster, 'postmaster.pid'), 'utf8').split('\n')[0]);

describe('the roles', () => {
  it('are no superusers, and the application may not change the structure', async () => {
    const roles = await ask(
      first.url,
      "select rolname, rolsuper from pg_roles where rolname like 'ebbline_%'"
    );
    expect(roles).toHaveLength(2);
    expect(roles.every((role) => role.rolsuper === false)).toBe(true);
    await ask(first.ownerUrl, 'create table kept (word text)');
    await ask(first.url, "insert into kept values ('ebb')");
    await expect(ask(first.url, 'drop table kept')).rejects.toThrow(/must be owner/);
    await expect(ask(first.url, 'create table other (a int)')).rejects.toThrow(/permission denied/);
  });

  it('need their passwords, which only the owner of the folder can read', async () => {
    const wrong = first.url.replace(/:[^:@/]+@/, ':guessed@');
    await expect(ask(wrong, 'select 1')).rejects.toThrow(/password authentication failed/);
    expect(statSync(join(folder, 'database.json')).mode & 0o777).toBe(0o600);
  });

  it('are reached on loopback only', async () => {
    const [row] = await ask(first.url, "select current_setting('listen_addresses') as at");
    expect(row?.at).toBe('127.0.0.1');
  });
});

describe('a second start', () => {
  it('joins a running server and leaves it running', async () => {
    const second = await startDatabase({ folder, quick: true });
    expect(second.started).toBe(false);
    expect(second.url).toBe(first.url);
    expect(second.stop()).toBe(false);
    expect(await ask(first.url, 'select word from kept')).toEqual([{ word: 'ebb' }]);
  });

  it('keeps port and data', async () => {
    expect(first.stop()).toBe(true);
    await expect(ask(first.url, 'select 1')).rejects.toThrow(/ECONNREFUSED/);
    const again = await startDatabase({ folder, quick: true });
    expect(again.started).toBe(true);
    expect(again.port).toBe(first.port);
    expect(await ask(again.url, 'select word from kept')).toEqual([{ word: 'ebb' }]);
    first = again;
  });

  it('recovers after the server was killed', async () => {
    process.kill(postmaster(), 'SIGKILL');
    const again = await startDatabase({ folder, quick: true });
    expect(again.started).toBe(true);
    expect(await ask(again.url, 'select word from kept')).toEqual([{ word: 'ebb' }]);
    first = again;
  }, 60_000);

  it('takes over a server whose starter is gone', async () => {
    const file = join(folder, 'database.json');
    const starter = JSON.parse(readFileSync(file, 'utf8'));
    writeFileSync(file, JSON.stringify({ ...starter, starter: '999999999:1' }));
    const heir = await startDatabase({ folder, quick: true });
    expect(heir.started).toBe(true);
    first = heir;
  });
});

describe('what is wrong is said in one sentence', () => {
  it('when the data were used by a newer Ebbline', async () => {
    await ask(first.ownerUrl, 'create table knex_migrations (id serial, name text)');
    await ask(first.ownerUrl, "insert into knex_migrations (name) values ('001_known.ts'), ('999_newer.ts')");
    const migrations = join(folder, 'migrations');
    mkdirSync(migrations);
    writeFileSync(join(migrations, '001_known.ts'), '');
    await expect(refuseNewerData(first.ownerUrl, migrations)).rejects.toThrow(/newer Ebbline.*999_newer\.ts/);
    writeFileSync(join(migrations, '999_newer.ts'), '');
    await expect(refuseNewerData(first.ownerUrl, migrations)).resolves.toBeUndefined();
  });

  it('when a fitting PostgreSQL is not installed', async () => {
    const other = mkdtempSync(join(tmpdir(), 'ebbline-own-'));
    const cluster = join(other, 'postgresql');
    mkdirSync(cluster);
    writeFileSync(join(cluster, 'PG_VERSION'), '99\n');
    const file = {
      passwords: { admin: 'a', owner: 'b', app: 'c' },
      cluster,
      port: first.port,
      prepared: true
    };
    writeFileSync(join(other, 'database.json'), JSON.stringify(file));
    await expect(startDatabase({ folder: other })).rejects.toThrow(
      /written by PostgreSQL 99.*install postgresql-99/
    );
    rmSync(other, { recursive: true });
  });

  it('when the settings cannot be read, or the database is not where it should be', async () => {
    const other = mkdtempSync(join(tmpdir(), 'ebbline-own-'));
    writeFileSync(join(other, 'database.json'), '{"passwords":');
    await expect(startDatabase({ folder: other })).rejects.toThrow(/cannot be read as JSON/);
    const gone = {
      passwords: { admin: 'a', owner: 'b', app: 'c' },
      cluster: join(other, 'gone'),
      prepared: true
    };
    writeFileSync(join(other, 'database.json'), JSON.stringify(gone));
    await expect(startDatabase({ folder: other })).rejects.toThrow(/should lie in .*gone, and is not there/);
    rmSync(other, { recursive: true });
  });

  it('when the data folder belongs to somebody else', () => {
    const other = mkdtempSync(join(tmpdir(), 'ebbline-own-'));
    const isRoot = process.getuid?.() === 0;
    if (isRoot) chownSync(other, 65_534, 65_534);
    // Somebody else's folder in either case: nobody's for root, root's for everybody else.
    expect(() => checkDataOwner(isRoot ? other : '/usr')).toThrow(/belongs to the user .* set DATA_DIR/);
    rmSync(other, { recursive: true });
  });
});
