/** One throw-away PostgreSQL for all database tests, with a migrated template that each file clones. */
import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import type { TestProject } from 'vitest/node';
import { startTestDatabase } from '../../scripts/pg.mjs';
import { connect } from '../../src/lib/server/db/client';
import { prepareDatabase } from '../../src/lib/server/db/migrate';

export const TEMPLATE = 'ebbline_template';

declare module 'vitest' {
  export interface ProvidedContext {
    databaseUrl: string;
    ownerUrl: string;
    dataFolder: string;
  }
}

export const withDatabase = (url: string, name: string) => {
  const changed = new URL(url);
  changed.pathname = `/${name}`;
  return changed.href;
};

export default async function setup(project: TestProject) {
  const server = await startTestDatabase();
  const dataFolder = mkdtempSync(join(tmpdir(), 'ebbline-files-'));
  const owner = connect(server.ownerUrl, 1);
  await owner.raw('create database ??', [TEMPLATE]);
  await owner.destroy();
  await prepareDatabase(withDatabase(server.ownerUrl, TEMPLATE), withDatabase(server.url, TEMPLATE));
  project.provide('databaseUrl', server.url);
  project.provide('ownerUrl', server.ownerUrl);
  project.provide('dataFolder', dataFolder);
  return () => {
    server.stop();
    rmSync(dataFolder, { recursive: true, force: true });
  };
}
