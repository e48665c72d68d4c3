import type { Knex } from 'knex';
import type { RehearsalRow } from '../rows';

export interface KeptRehearsal {
  id: string;
  saveNumber: number;
  run: string;
  author: string | null;
  report: unknown;
  at: Date;
}

export const rehearsals = (db: Knex) => ({
  async insert(
    labId: string,
    taskId: string,
    r: { saveNumber: number; run: string; author: string; report: unknown }
  ): Promise<string> {
    const rows = await db<RehearsalRow>('rehearsals')
      .insert({
        lab_id: labId,
        task_id: taskId,
        save_number: r.saveNumber,
        run_id: r.run,
        author: r.author,
        report: JSON.stringify(r.report)
      })
      .returning('id');
    return rows[0]!.id;
  },
  /** Latest first. */
  async list(labId: string, taskId: string, limit = 50): Promise<KeptRehearsal[]> {
    const rows: (RehearsalRow & { author_name: string | null })[] = await db('rehearsals as r')
      .leftJoin('users as u', 'u.id', 'r.author')
      .where({ 'r.lab_id': labId, 'r.task_id': taskId })
      .orderBy('r.created_at', 'desc')
      .limit(limit)
      .select('r.*', 'u.name as author_name');
    return rows.map((r) => ({
      id: r.id,
      saveNumber: r.save_number,
      run: r.run_id,
      author: r.author_name,
      report: r.report,
      at: r.created_at
    }));
  },
  /** Remove all but the latest `keep` of each task; returns how many went. For the nightly job, over all labs. */
  async prune(keep: number): Promise<number> {
    const done = await db.raw(
      `delete from rehearsals where id in (
         select id from (
           select id, row_number() over (partition by lab_id, task_id order by created_at desc, id) as place
           from rehearsals) as placed
         where place > ?)`,
      [keep]
    );
    return done.rowCount;
  }
});
