import type { Knex } from 'knex';
import PgBoss from 'pg-boss';

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
