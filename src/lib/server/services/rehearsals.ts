import type { Knex } from 'knex';
import { z } from 'zod';
import { rehearsals } from '../db/repositories/rehearsals';
import { saves } from '../db/repositories/saves';
import type { Role } from '../db/rows';
import { refuse } from '../errors';
import { getTask } from './tasks';

export const MAX_REPORT = 2_000_000;
export const rehearsalSchema = z.object({
  /** Id of the run that was rehearsed. */
  run: z.string().min(1).max(40),
  /** Save of the task that was rehearsed. */
  saveNumber: z.number().int().min(1),
  /** What the player reported, as it reported it. */
  report: z.looseObject({})
});

/** Keep a rehearsal's report with the save it was of. A reader may rehearse, but nothing is kept. */
export async function keepRehearsal(
  db: Knex,
  where: { lab: string; task: string; author: string; role: Role },
  given: z.infer<typeof rehearsalSchema>
): Promise<{ kept: boolean; id: string | null }> {
  await getTask(db, where.lab, where.task);
  if (where.role === 'reader') return { kept: false, id: null };
  if (JSON.stringify(given.report).length > MAX_REPORT)
    refuse(413, `The report is larger than the ${MAX_REPORT / 1e6} MB kept of a rehearsal.`);
  if (!(await saves(db).manifest(where.lab, where.task, given.saveNumber)))
    refuse(422, `This task has no save ${given.saveNumber}, so the rehearsal cannot be of it.`, {
      details: [{ path: 'saveNumber', message: 'is no save of this task' }]
    });
  const id = await rehearsals(db).insert(where.lab, where.task, { ...given, author: where.author });
  return { kept: true, id };
}

export async function listRehearsals(db: Knex, labId: string, taskId: string) {
  await getTask(db, labId, taskId);
  return rehearsals(db).list(labId, taskId);
}
