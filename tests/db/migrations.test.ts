import { describe, expect, it } from 'vitest';
import { readdirSync } from 'node:fs';
import {
  applyMigrations,
  applyNextMigration,
  grantTo,
  prepareDatabase,
  revertMigrations
} from '$lib/server/db/migrate';
import { useDatabase } from './support/database';

const t = useDatabase({ template: null });
const HASH = 'a'.repeat(64);
const insert = (table: string, row: Record<string, unknown>) =>
  t
    .owner(table)
    .insert(row)
    .returning('*')
    .then((r) => r[0]);

/** Rows to put in once a migration has made their table, so that every later one runs on a database with data. */
async function fill(migration: string): Promise<void> {
  if (migration.startsWith('001')) {
    const user = await insert('users', { email: 'a@marram.example', name: 'A', password_hash: 'x' });
    await insert('sessions', { id: 's', user_id: user.id, expires_at: new Date(Date.now() + 1e6) });
    await insert('sign_in_attempts', { account: user.email, address: '127.0.0.1' });
  } else if (migration.startsWith('002')) {
    const lab = await insert('labs', { name: 'Marram Lab' });
    const user = await t.owner('users').first();
    await insert('memberships', { lab_id: lab.id, user_id: user.id, role: 'owner' });
    await insert('audit', { lab_id: lab.id, actor: user.id, action: 'lab made' });
  } else if (migration.startsWith('003')) {
    const lab_id = (await t.owner('labs').first()).id;
    const study = await insert('studies', { lab_id, label: 'senses', name: 'Senses' });
    const task = await insert('tasks', { lab_id, study_id: study.id, label: 't', name: 'T', save_number: 1 });
    await insert('parts', { lab_id, hash: HASH, body: '{}' });
    await insert('saves', { lab_id, task_id: task.id, number: 1, manifest: { brief: HASH } });
  } else if (migration.startsWith('004')) {
    const { id: task_id, lab_id } = await t.owner('tasks').first();
    await insert('assets', { lab_id, sha256: HASH, mime: 'image/png', size: 1, name: 'a.png' });
    const profile = await insert('profiles', { lab_id, name: 'P', version: 1 });
    await insert('profile_versions', { lab_id, profile_id: profile.id, version: 1, hash: HASH, body: {} });
    await insert('revisions', { lab_id, task_id, hash: HASH, save_number: 1, snapshot: '{}' });
    await insert('rehearsals', { lab_id, task_id, save_number: 1, run_id: 'run', report: {} });
  } else throw new Error(`${migration} needs rows of its own here`);
}

const tables = async () =>
  (
    await t.owner.raw(
      "select table_name as name from information_schema.tables where table_schema = 'public' order by 1"
    )
  ).rows.map((r: { name: string }) => r.name);
const tenantTables = async () =>
  (
    await t.owner.raw(
      "select table_name as name from information_schema.columns where table_schema = 'public' and column_name = 'lab_id' order by 1"
    )
  ).rows.map((r: { name: string }) => r.name) as string[];

describe('migrations', () => {
  const files = readdirSync('migrations').sort();

  it('each runs on a database that holds rows of every earlier one', async () => {
    const ran: string[] = [];
    for (;;) {
      const [, names] = (await applyNextMigration(t.owner)) as [number, string[]];
      if (names.length === 0) break;
      ran.push(...names.map((n) => n.slice(n.lastIndexOf('/') + 1)));
      await fill(ran.at(-1)!);
    }
    expect(ran).toEqual(files);
    for (const table of await tables())
      if (!table.startsWith('knex_')) expect(await t.owner(table).first(), table).toBeDefined();
  });

  it('are under the names that the command line gives them, and a second start changes nothing', async () => {
    expect((await t.owner('knex_migrations').orderBy('id')).map((r) => r.name)).toEqual(files);
    await prepareDatabase(t.ownerUrl, t.url);
    await prepareDatabase(t.ownerUrl, t.url);
    expect(await t.owner('users')).toHaveLength(1);
  });

  it('every tenant table hangs on its parent by the lab as well', async () => {
    const alone = ['memberships', 'audit', 'studies', 'parts', 'assets', 'profiles'];
    const composite = (
      await t.owner.raw(
        `select conrelid::regclass::text as name from pg_constraint
         where contype = 'f' and cardinality(conkey) > 1`
      )
    ).rows.map((r: { name: string }) => r.name);
    expect(await tenantTables()).toEqual(expect.arrayContaining(alone));
    for (const table of await tenantTables())
      if (!alone.includes(table)) expect(composite, table).toContain(table);
    const lab = await insert('labs', { name: 'Another' });
    const task = await t.owner('tasks').first();
    await expect(
      insert('tasks', { lab_id: lab.id, study_id: task.study_id, label: 'x', name: 'X', save_number: 1 })
    ).rejects.toThrow(/foreign key/);
    await expect(
      insert('rehearsals', { lab_id: lab.id, task_id: task.id, save_number: 1, run_id: 'r', report: {} })
    ).rejects.toThrow(/foreign key/);
  });

  it('the application’s role changes rows, but neither structure nor what must stay', async () => {
    await grantTo(t.owner, new URL(t.url).username);
    expect(await t.db('users').update({ name: 'B' })).toBe(1);
    await expect(t.db.raw('create table mine (id int)')).rejects.toThrow(/permission denied/);
    await expect(t.db.raw('alter table users add column x int')).rejects.toThrow(/must be owner/);
    await expect(t.db('knex_migrations').select()).rejects.toThrow(/permission denied/);
    for (const kept of ['revisions', 'audit', 'saves', 'parts', 'profile_versions']) {
      await expect(t.db(kept).del(), kept).rejects.toThrow(/permission denied/);
      await expect(t.db(kept).update({ lab_id: null }), kept).rejects.toThrow(/permission denied/);
    }
    const role = await t.db.raw(
      'select rolsuper, rolcreatedb, rolcreaterole from pg_roles where rolname = current_user'
    );
    expect(role.rows[0]).toEqual({ rolsuper: false, rolcreatedb: false, rolcreaterole: false });
    const owned = await t.db.raw(
      `select distinct n.nspname as name from pg_class c join pg_namespace n on n.oid = c.relnamespace
       where c.relowner = current_user::regrole`
    );
    // Large values of its tables lie in pg_toast.
    expect(owned.rows.map((r: { name: string }) => r.name).filter((n: string) => n !== 'pg_toast')).toEqual([
      'pgboss'
    ]);
  });

  it('not even the owner rewrites a sealed revision', async () => {
    await expect(t.owner('revisions').update({ snapshot: '{"changed":true}' })).rejects.toThrow(
      /never changes/
    );
    await expect(t.owner('revisions').update({ hash: 'b'.repeat(64) })).rejects.toThrow(/never changes/);
    // An account may go; what it sealed stays.
    await t.owner('revisions').update({ sealed_by: null });
  });

  it('can all be taken back and run again', async () => {
    await revertMigrations(t.owner);
    expect((await tables()).filter((n: string) => !n.startsWith('knex_'))).toEqual([]);
    await applyMigrations(t.owner);
    expect(await tables()).toContain('revisions');
  });
});
