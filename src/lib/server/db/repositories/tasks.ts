import type { Knex } from 'knex';
import { toTask, type Task, type TaskRow } from '../rows';

export const tasks = (db: Knex) => {
  const live = (labId: string) => db<TaskRow>('tasks').where({ lab_id: labId, deleted_at: null });
  return {
    async list(labId: string, studyId?: string): Promise<Task[]> {
      const query = live(labId).orderBy('name');
      if (studyId) query.andWhere({ study_id: studyId });
      return (await query).map(toTask);
    },
    async find(labId: string, id: string): Promise<Task | null> {
      const row = await live(labId).andWhere({ id }).first();
      return row ? toTask(row) : null;
    },
    /** The task's row, locked until the transaction ends: saves of one task go one after another. */
    async lock(labId: string, id: string): Promise<Task | null> {
      const row = await live(labId).andWhere({ id }).forUpdate().first();
      return row ? toTask(row) : null;
    },
    async insert(labId: string, task: { study: string; label: string; name: string }): Promise<Task> {
      const rows = await db<TaskRow>('tasks')
        .insert({ lab_id: labId, study_id: task.study, label: task.label, name: task.name, save_number: 1 })
        .returning('*');
      return toTask(rows[0]!);
    },
    /** Title and label follow the brief, so that lists and addresses show what the document says. */
    async saved(labId: string, id: string, now: { number: number; label: string; name: string; at: Date }) {
      await live(labId)
        .andWhere({ id })
        .update({ save_number: now.number, label: now.label, name: now.name, updated_at: now.at });
    },
    async remove(labId: string, id: string): Promise<void> {
      await live(labId).andWhere({ id }).update({ deleted_at: new Date() });
    }
  };
};
