/** Nightly tidying: what has ended or been superseded and is of no use to anybody any more. */
import { readdir, rm, stat } from 'node:fs/promises';
import { join } from 'node:path';
import type { Knex } from 'knex';
import { rehearsals } from '../db/repositories/rehearsals';

export const CLEAN = 'clean';
/** Every night at 03:17 UTC. */
export const CLEAN_AT = '17 3 * * *';
/** Rehearsal reports kept for each task. */
export const REHEARSALS_KEPT = 200;
const DAY_MS = 24 * 3600 * 1000;

export interface Cleaned {
  sessions: number;
  attempts: number;
  rehearsals: number;
  uploads: number;
}

/** @param uploads folder of uploads in progress; what is a day old there was cut off. */
export async function clean(db: Knex, uploads: string): Promise<Cleaned> {
  return {
    sessions: await db('sessions').where('expires_at', '<=', db.fn.now()).del(),
    attempts: await db('sign_in_attempts').whereRaw("at < now() - interval '1 day'").del(),
    rehearsals: await rehearsals(db).prune(REHEARSALS_KEPT),
    uploads: await removeOld(uploads)
  };
}

async function removeOld(folder: string): Promise<number> {
  let removed = 0;
  for (const name of await readdir(folder).catch(() => [] as string[])) {
    const path = join(folder, name);
    if (Date.now() - (await stat(path)).mtimeMs < DAY_MS) continue;
    await rm(path, { recursive: true, force: true });
    removed++;
  }
  return removed;
}
