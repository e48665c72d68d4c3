import type { Knex } from 'knex';

export interface TaskChange {
  task: string;
  name: string;
  number: number;
  author: string | null;
  words: string[];
  savedAt: Date;
}

/** The latest saves of all tasks of a lab, newest first. */
export async function recentSaves(db: Knex, labId: string, limit: number): Promise<TaskChange[]> {
  return db('saves as s')
    .join('tasks as t', (on) => on.on('t.id', 's.task_id').andOn('t.lab_id', 's.lab_id'))
    .leftJoin('users as u', 'u.id', 's.author')
    .where({ 's.lab_id': labId, 't.deleted_at': null })
    .orderBy('s.saved_at', 'desc')
    .limit(limit)
    .select(
      's.task_id as task',
      't.name',
      's.number',
      'u.name as author',
      's.words',
      's.saved_at as savedAt'
    );
}

/** Save number of the newest snapshot kept by Pack, for each task that has one. */
export async function packedAt(db: Knex, labId: string): Promise<Map<string, number>> {
  const rows: { task_id: string; number: number }[] = await db('revisions')
    .where({ lab_id: labId })
    .groupBy('task_id')
    .select('task_id')
    .max('save_number as number');
  return new Map(rows.map((row) => [row.task_id, row.number]));
}
