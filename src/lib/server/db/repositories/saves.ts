import type { Knex } from 'knex';
import { hashesOf, type Manifest, type Parts } from '$lib/task/parts';
import type { PartRow, Save, SaveRow } from '../rows';

/** Manifests and the parts they name. Rows are only ever added. */
export const saves = (db: Knex) => ({
  /** Keep the parts that this lab does not have yet; returns how many were new. */
  async keepParts(labId: string, parts: Parts): Promise<number> {
    // Sorted, so that two saves at once take their locks in one order.
    const rows = Object.keys(parts)
      .sort()
      .map((hash) => ({ lab_id: labId, hash, body: parts[hash]! }));
    const kept = await db<PartRow>('parts')
      .insert(rows)
      .onConflict(['lab_id', 'hash'])
      .ignore()
      .returning('hash');
    return kept.length;
  },

  async insert(
    labId: string,
    taskId: string,
    save: { number: number; manifest: Manifest; author: string; words: string[] }
  ): Promise<Date> {
    const [row] = await db('saves')
      .insert({
        lab_id: labId,
        task_id: taskId,
        number: save.number,
        manifest: JSON.stringify(save.manifest),
        author: save.author,
        words: JSON.stringify(save.words)
      })
      .returning('saved_at');
    return row.saved_at;
  },

  async manifest(labId: string, taskId: string, number: number): Promise<Manifest | null> {
    const row = await db<SaveRow>('saves')
      .where({ lab_id: labId, task_id: taskId, number })
      .first('manifest');
    return row?.manifest ?? null;
  },

  async parts(labId: string, manifest: Manifest): Promise<Parts> {
    const rows = await db<PartRow>('parts')
      .where({ lab_id: labId })
      .whereIn('hash', hashesOf(manifest))
      .select('hash', 'body');
    return Object.fromEntries(rows.map((r) => [r.hash, r.body]));
  },

  /** Latest first. */
  async latest(labId: string, taskId: string, limit = 50): Promise<Save[]> {
    const rows: (SaveRow & { author_name: string | null })[] = await db('saves as s')
      .leftJoin('users as u', 'u.id', 's.author')
      .where({ 's.lab_id': labId, 's.task_id': taskId })
      .orderBy('s.number', 'desc')
      .limit(limit)
      .select('s.number', 's.words', 's.saved_at', 'u.name as author_name');
    return rows.map((r) => ({
      number: r.number,
      author: r.author_name,
      words: r.words,
      savedAt: r.saved_at
    }));
  }
});
