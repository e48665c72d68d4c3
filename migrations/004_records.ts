/** Stimulus files, scanner profiles with their versions, sealed revisions and kept rehearsals. */
import type { Knex } from 'knex';

const hash = "~ '^[0-9a-f]{64}$'";

export async function up(db: Knex): Promise<void> {
  await db.schema.createTable('assets', (table) => {
    table.uuid('lab_id').notNullable().references('labs.id').onDelete('CASCADE');
    table.text('sha256').notNullable();
    table.text('mime').notNullable();
    table.integer('size').notNullable();
    /** The uploaded file's own name, for people. */
    table.text('name').notNullable();
    /** Consent or licence, in the lab's words. */
    table.text('note').notNullable().defaultTo('');
    table.boolean('redistributable').notNullable().defaultTo(false);
    table.uuid('uploaded_by').references('users.id').onDelete('SET NULL');
    table.timestamp('created_at').notNullable().defaultTo(db.fn.now());
    table.primary(['lab_id', 'sha256']);
    table.check(`sha256 ${hash}`, [], 'assets_sha256');
  });
  await db.schema.createTable('profiles', (table) => {
    table.uuid('id').primary().defaultTo(db.raw('gen_random_uuid()'));
    table.uuid('lab_id').notNullable().references('labs.id').onDelete('CASCADE');
    table.text('name').notNullable();
    table.integer('version').notNullable();
    table.timestamp('created_at').notNullable().defaultTo(db.fn.now());
    table.unique(['lab_id', 'id']);
  });
  await db.schema.createTable('profile_versions', (table) => {
    table.uuid('lab_id').notNullable();
    table.uuid('profile_id').notNullable();
    table.integer('version').notNullable();
    table.text('hash').notNullable();
    table.jsonb('body').notNullable();
    table.uuid('author').references('users.id').onDelete('SET NULL');
    table.timestamp('saved_at').notNullable().defaultTo(db.fn.now());
    table.primary(['lab_id', 'profile_id', 'version']);
    table
      .foreign(['lab_id', 'profile_id'])
      .references(['lab_id', 'id'])
      .inTable('profiles')
      .onDelete('CASCADE');
    table.check(`hash ${hash}`, [], 'profile_versions_hash');
  });
  await db.schema.createTable('revisions', (table) => {
    table.uuid('id').primary().defaultTo(db.raw('gen_random_uuid()'));
    table.uuid('lab_id').notNullable();
    table.uuid('task_id').notNullable();
    table.text('hash').notNullable();
    table.integer('save_number').notNullable();
    /** The very bytes that were hashed: canonical JSON of {format, document, assets}. */
    table.text('snapshot').notNullable();
    table.uuid('sealed_by').references('users.id').onDelete('SET NULL');
    table.timestamp('sealed_at').notNullable().defaultTo(db.fn.now());
    table.unique(['lab_id', 'task_id', 'hash']);
    table.unique(['lab_id', 'id']);
    table.foreign(['lab_id', 'task_id']).references(['lab_id', 'id']).inTable('tasks').onDelete('CASCADE');
    table.check(`hash ${hash}`, [], 'revisions_hash');
  });
  // Not even the owner role rewrites a sealed revision; `sealed_by` alone may become null with its account.
  await db.raw(`
    create function refuse_revision_change() returns trigger language plpgsql as $$
    begin
      if (new.id, new.lab_id, new.task_id, new.hash, new.save_number, new.snapshot, new.sealed_at)
        is distinct from
        (old.id, old.lab_id, old.task_id, old.hash, old.save_number, old.snapshot, old.sealed_at)
      then raise exception 'a sealed revision never changes';
      end if;
      return new;
    end $$`);
  await db.raw(
    'create trigger revisions_frozen before update on revisions for each row execute function refuse_revision_change()'
  );
  await db.schema.createTable('rehearsals', (table) => {
    table.uuid('id').primary().defaultTo(db.raw('gen_random_uuid()'));
    table.uuid('lab_id').notNullable();
    table.uuid('task_id').notNullable();
    table.integer('save_number').notNullable();
    table.text('run_id').notNullable();
    table.uuid('author').references('users.id').onDelete('SET NULL');
    table.jsonb('report').notNullable();
    table.timestamp('created_at').notNullable().defaultTo(db.fn.now());
    table.index(['lab_id', 'task_id', 'created_at']);
    table
      .foreign(['lab_id', 'task_id', 'save_number'])
      .references(['lab_id', 'task_id', 'number'])
      .inTable('saves')
      .onDelete('CASCADE');
  });
}

export async function down(db: Knex): Promise<void> {
  for (const table of ['rehearsals', 'revisions', 'profile_versions', 'profiles', 'assets'])
    await db.schema.dropTable(table);
  await db.raw('drop function refuse_revision_change()');
}
