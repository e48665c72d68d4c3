/** Sealing: the content of a task frozen under its hash. The player is not in it; its build stands in the bundle. */
import type { Knex } from 'knex';
import { z } from 'zod';
import { canonicalJson, sha256Hex } from '$lib/task/canonical';
import type { TaskDocument } from '$lib/task/schema';
import { readDocument } from '$lib/task/upgrade';
import { audit } from '../db/repositories/audit';
import { revisions } from '../db/repositories/revisions';
import { notFound } from '../errors';
import { assetHashes, checkAssets } from './documents';

/** The bytes that a revision's hash is of: canonical JSON of { assets, document, format }. */
export const snapshotOf = (document: TaskDocument): string =>
  canonicalJson({ format: document.format, document, assets: assetHashes(document).sort() });

export const revisionHash = (document: TaskDocument): string => sha256Hex(snapshotOf(document));

const snapshotSchema = z.looseObject({ document: z.unknown(), assets: z.array(z.string()) });

/** Keep a snapshot of this document; the same content gives the same revision, made once. */
export async function sealSnapshot(
  db: Knex,
  labId: string,
  taskId: string,
  from: { document: TaskDocument; saveNumber: number },
  by: string
) {
  await checkAssets(db, labId, from.document);
  const snapshot = snapshotOf(from.document);
  return revisions(db).keep(labId, {
    task: taskId,
    hash: sha256Hex(snapshot),
    saveNumber: from.saveNumber,
    snapshot,
    sealedBy: by
  });
}

export async function getRevision(db: Knex, labId: string, id: string) {
  return (await revisions(db).find(labId, id)) ?? notFound('revision');
}

/** The document of a revision, in today's format; what is stored stays as it was sealed. */
export async function documentOfRevision(db: Knex, labId: string, id: string): Promise<TaskDocument> {
  const { snapshot } = await getRevision(db, labId, id);
  const reading = readDocument(snapshotSchema.parse(JSON.parse(snapshot)).document);
  if (!reading.ok) throw new Error(`Revision ${id} cannot be read: ${JSON.stringify(reading.problems)}`);
  return reading.document;
}

export const listRevisions = (db: Knex, labId: string, taskId?: string) => revisions(db).list(labId, taskId);

export const notePacking = (db: Knex, labId: string, by: string, details: Record<string, unknown>) =>
  audit(db).add(labId, by, 'bundle packed', details);
