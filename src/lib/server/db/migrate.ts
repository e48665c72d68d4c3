/**
 * Migrations from the top-level folder, compiled into the build. Stored names equal the command line's, so both share
 * one history. They run as the owner; afterwards the application's role is granted what it needs and no more.
 */
import type { Knex } from 'knex';
import PgBoss from 'pg-boss';
import { connect } from './client';

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

export const QUEUE_SCHEMA = 'pgboss';

/**
 * The job queue's tables, owned by the application's role. pg-boss could make them itself, but only with the right to
 * create schemas in this database, which the application's role does not have; so the owner does it on its behalf.
 */
export async function prepareQueue(owner: Knex, role: string): Promise<void> {
  const known = await owner.raw('select to_regclass(?) as name', [`${QUEUE_SCHEMA}.version`]);
  if (known.rows[0].name) return;
  const create = /CREATE SCHEMA IF NOT EXISTS \w+\s*;/;
  const plans = PgBoss.getConstructionPlans(QUEUE_SCHEMA);
  if (!create.test(plans))
    throw new Error('pg-boss makes its tables in another way than this was written for.');
  await owner.raw('create schema if not exists ?? authorization ??', [QUEUE_SCHEMA, role]);
  const connection = await owner.client.acquireConnection();
  try {
    // Through the bare driver: the plans are several statements, with question marks that are no bindings.
    await connection.query(
      `set role ${connection.escapeIdentifier(role)}; ${plans.replace(create, '')}; reset role`
    );
  } finally {
    await owner.client.releaseConnection(connection);
  }
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
