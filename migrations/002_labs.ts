/** Labs, who belongs to them in which role, and what was done. Every tenant table below carries `lab_id`. */
import type { Knex } from 'knex';

export async function up(db: Knex): Promise<void> {
  await db.schema.createTable('labs', (table) => {
    table.uuid('id').primary().defaultTo(db.raw('gen_random_uuid()'));
    table.text('name').notNullable();
    table.boolean('demo').notNullable().defaultTo(false);
    table.timestamp('created_at').notNullable().defaultTo(db.fn.now());
  });
  await db.schema.createTable('memberships', (table) => {
    table.uuid('lab_id').notNullable().references('labs.id').onDelete('CASCADE');
    table.uuid('user_id').notNullable().references('users.id').onDelete('CASCADE').index();
    table.text('role').notNullable();
    /** May sign off in an owner's stead. */
    table.boolean('deputy').notNullable().defaultTo(false);
    table.timestamp('created_at').notNullable().defaultTo(db.fn.now());
    table.primary(['lab_id', 'user_id']);
    table.check("role in ('owner', 'experimenter', 'operator', 'reader')", [], 'memberships_role');
  });
  await db.schema.createTable('audit', (table) => {
    table.bigIncrements('id');
    table.uuid('lab_id').notNullable().references('labs.id').onDelete('CASCADE');
    table.uuid('actor').references('users.id').onDelete('SET NULL');
    table.text('action').notNullable();
    table.jsonb('details').notNullable().defaultTo('{}');
    table.timestamp('at').notNullable().defaultTo(db.fn.now());
    table.index(['lab_id', 'id']);
  });
}

export async function down(db: Knex): Promise<void> {
  for (const table of ['audit', 'memberships', 'labs']) await db.schema.dropTable(table);
}
