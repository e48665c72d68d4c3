/** Accounts, their sessions, and the sign-in attempts by which guessing is slowed. */
import type { Knex } from 'knex';

export async function up(db: Knex): Promise<void> {
  await db.schema.createTable('users', (table) => {
    table.uuid('id').primary().defaultTo(db.raw('gen_random_uuid()'));
    table.text('email').notNullable().unique();
    table.text('name').notNullable();
    table.text('password_hash').notNullable();
    table.timestamp('created_at').notNullable().defaultTo(db.fn.now());
    table.check('email = lower(email)', [], 'users_email_lower');
  });
  await db.schema.createTable('sessions', (table) => {
    table.text('id').primary();
    table.uuid('user_id').notNullable().references('users.id').onDelete('CASCADE').index();
    table.timestamp('expires_at').notNullable().index();
    table.timestamp('created_at').notNullable().defaultTo(db.fn.now());
  });
  await db.schema.createTable('sign_in_attempts', (table) => {
    table.bigIncrements('id');
    table.text('account').notNullable();
    table.text('address').notNullable();
    table.timestamp('at').notNullable().defaultTo(db.fn.now());
    table.index(['account', 'at']);
    table.index(['address', 'at']);
  });
}

export async function down(db: Knex): Promise<void> {
  for (const table of ['sign_in_attempts', 'sessions', 'users']) await db.schema.dropTable(table);
}
