/**
 * Studies, tasks and the document store: parts are kept once per lab under the hash of their canonical JSON, a save is
 * a manifest of part hashes. Composite foreign keys make it impossible to hang a row under another lab's parent.
 */
import type { Knex } from 'knex';

const hash = "~ '^[0-9a-f]{64}$'";

export async function up(db: Knex): Promise<void> {
  await db.schema.createTable('studies', (table) => {
    table.uuid('id').primary().defaultTo(db.raw('gen_random_uuid()'));
    table.uuid('lab_id').notNullable().references('labs.id').onDelete('CASCADE');
    table.text('label').notNullable();
    table.text('name').notNullable();
    table.timestamp('created_at').notNullable().defaultTo(db.fn.now());
    table.timestamp('deleted_at');
    table.unique(['lab_id', 'id']);
  });
  await db.raw('create unique index studies_label on studies (lab_id, label) where deleted_at is null');
  await db.schema.createTable('tasks', (table) => {
    table.uuid('id').primary().defaultTo(db.raw('gen_random_uuid()'));
    table.uuid('lab_id').notNullable();
    table.uuid('study_id').notNullable();
    table.text('label').notNullable();
    table.text('name').notNullable();
    table.integer('save_number').notNullable();
    table.timestamp('created_at').notNullable().defaultTo(db.fn.now());
    table.timestamp('updated_at').notNullable().defaultTo(db.fn.now());
    table.timestamp('deleted_at');
    table.unique(['lab_id', 'id']);
    table.foreign(['lab_id', 'study_id']).references(['lab_id', 'id']).inTable('studies').onDelete('CASCADE');
  });
  await db.raw('create unique index tasks_label on tasks (study_id, label) where deleted_at is null');
  await db.schema.createTable('parts', (table) => {
    table.uuid('lab_id').notNullable().references('labs.id').onDelete('CASCADE');
    table.text('hash').notNullable();
    table.text('body').notNullable();
    table.primary(['lab_id', 'hash']);
    table.check(`hash ${hash}`, [], 'parts_hash');
  });
  await db.schema.createTable('saves', (table) => {
    table.uuid('lab_id').notNullable();
    table.uuid('task_id').notNullable();
    table.integer('number').notNullable();
    table.jsonb('manifest').notNullable();
    table.uuid('author').references('users.id').onDelete('SET NULL');
    table.jsonb('words').notNullable().defaultTo('[]');
    table.timestamp('saved_at').notNullable().defaultTo(db.fn.now());
    table.primary(['lab_id', 'task_id', 'number']);
    table.foreign(['lab_id', 'task_id']).references(['lab_id', 'id']).inTable('tasks').onDelete('CASCADE');
  });
}

export async function down(db: Knex): Promise<void> {
  for (const table of ['saves', 'parts', 'tasks', 'studies']) await db.schema.dropTable(table);
}
