/** A database of this file's own, cloned from the migrated template; the application's pool points to it. */
import type { Knex } from 'knex';
import { join } from 'node:path';
import { afterAll, beforeAll, inject, vi } from 'vitest';
import { closeDatabase, connect, database } from '$lib/server/db/client';
import { TEMPLATE, withDatabase } from '../global-setup';

export interface TestDatabase {
  /** As the application's role. */
  db: Knex;
  /** As the owner role. */
  owner: Knex;
  url: string;
  ownerUrl: string;
}

/** Call at the top of a test file; the handles are there once its tests run. */
export function useDatabase({
  template = TEMPLATE,
  origin = 'http://ebbline.test'
}: { template?: string | null; origin?: string } = {}): TestDatabase {
  // Hashing and cloning take their time on a machine that does other work too; nothing here measures speed.
  vi.setConfig({ testTimeout: 60_000, hookTimeout: 60_000 });
  const name = `t_${crypto.randomUUID().replaceAll('-', '')}`;
  const made = { url: '', ownerUrl: '' } as TestDatabase;
  const asServerOwner = async (sql: string, names: string[]) => {
    const maker = connect(inject('ownerUrl'), 1);
    try {
      await maker.raw(sql, names);
    } finally {
      await maker.destroy();
    }
  };
  beforeAll(async () => {
    if (template) await asServerOwner('create database ?? template ??', [name, template]);
    else await asServerOwner('create database ??', [name]);
    made.url = withDatabase(inject('databaseUrl'), name);
    made.ownerUrl = withDatabase(inject('ownerUrl'), name);
    process.env.DATABASE_URL = made.url;
    process.env.DATABASE_OWNER_URL = made.ownerUrl;
    process.env.EBBLINE_DATA = join(inject('dataFolder'), name);
    process.env.HOST = '127.0.0.1';
    process.env.ORIGIN = origin;
    made.db = database();
    made.owner = connect(made.ownerUrl, 2);
  });
  afterAll(async () => {
    await closeDatabase();
    await made.owner?.destroy();
    await asServerOwner('drop database if exists ?? with (force)', [name]);
  });
  return made;
}
