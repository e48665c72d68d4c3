/**
 * Migrations from the top-level folder, compiled into the build. Stored names equal the command line's, so both share
 * one history. They run as the owner; afterwards the application's role is granted what it needs and no more.
 */
import type { Knex } from 'knex';
import { connect } from './client';
import { prepareQueue } from './queue-schema';

const modules = import.meta.glob<Knex.Migration>('/migrations/*.ts', { eager: true });

const migrationSource: Knex.MigrationSource<string> = {
  getMigrations: async () => Object.keys(modules).sort(),
  getMigrationName: (path) => path.slice(path.lastIndexOf('/') + 1),
  getMigration: async (path) => modules[path]!
};

/** Apply what is missing (or the next one only) through a connection of the owner's. */
export const applyMigrations = (owner: Knex) => owner.migrate.latest({ migrationSource });
export const applyNextMigration = (owner: Knex) => owner.migrate.up({ migrationSource });
export const revertMigrations = (owner: Knex) => owner.migrate.rollback({ migrationSource }, true);

/** What the application's role may do: rows yes, structure no, sealed revisions and the audit are never altered. */
export async function grantTo(owner: Knex, role: string): Promise<void> {
  const self = (await owner.raw('select current_user as name')).rows[0].name as string;
  if (self === role) return;
  await owner.transaction(async (trx) => {
    await trx.raw('grant usage on schema public to ??', [role]);
    await trx.raw('grant select, insert, update, delete on all tables in schema public to ??', [role]);
    await trx.raw('grant usage, select on all sequences in schema public to ??', [role]);
    await trx.raw('revoke all on knex_migrations, knex_migrations_lock from ??', [role]);
    await trx.raw('revoke update, delete on revisions, audit, saves, parts, profile_versions from ??', [
      role
    ]);
  });
}

/** Bring the database up to date at start. */
export async function prepareDatabase(ownerUrl: string, appUrl: string): Promise<void> {
  const owner = connect(ownerUrl, 2);
  try {
    await applyMigrations(owner);
    const role = decodeURIComponent(new URL(appUrl).username);
    await grantTo(owner, role);
    await prepareQueue(owner, role);
  } finally {
    await owner.destroy();
  }
}
