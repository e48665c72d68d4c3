import type { Knex } from 'knex';
import { toRevision, type Revision, type RevisionRow } from '../rows';

const columns = ['id', 'lab_id', 'task_id', 'hash', 'save_number', 'sealed_by', 'sealed_at'] as const;

/** Sealed snapshots; the database itself refuses to change one. */
export const revisions = (db: Knex) => {
  const table = (labId: string) => db<RevisionRow>('revisions').where({ lab_id: labId });
  return {
    /** Keep a snapshot; the same content gives the revision that is there already. */
    async keep(
      labId: string,
      r: { task: string; hash: string; saveNumber: number; snapshot: string; sealedBy: string }
    ): Promise<Revision> {
      await db<RevisionRow>('revisions')
        .insert({
          lab_id: labId,
          task_id: r.task,
          hash: r.hash,
          save_number: r.saveNumber,
          snapshot: r.snapshot,
          sealed_by: r.sealedBy
        })
        .onConflict(['lab_id', 'task_id', 'hash'])
        .ignore();
      const row = await table(labId)
        .andWhere({ task_id: r.task, hash: r.hash })
        .first(...columns);
      return toRevision(row!);
    },
    /** Latest first. */
    async list(labId: string, taskId?: string): Promise<(Revision & { task: string })[]> {
      const query = table(labId)
        .orderBy('sealed_at', 'desc')
        .select(...columns);
      if (taskId) query.andWhere({ task_id: taskId });
      return (await query).map((r) => ({ ...toRevision(r), task: r.task_id }));
    },
    async find(labId: string, id: string): Promise<(Revision & { task: string; snapshot: string }) | null> {
      const row = await table(labId).andWhere({ id }).first();
      return row ? { ...toRevision(row), task: row.task_id, snapshot: row.snapshot } : null;
    }
  };
};
