import type { Knex } from 'knex';
import { z } from 'zod';
import { newCondition, newDocument } from '$lib/task/create';
import { splitDocument } from '$lib/task/parts';
import { MAX_VOLUMES, type TaskDocument } from '$lib/task/schema';
import { toMicros } from '$lib/task/time';
import { audit } from '../db/repositories/audit';
import { saves } from '../db/repositories/saves';
import { tasks } from '../db/repositories/tasks';
import type { Task } from '../db/rows';
import { accept, notFound } from '../errors';
import { acceptDocument, checkAssets, withTaskLabel } from './documents';
import { getProfile } from './profiles';
import { getStudy, labelSchema } from './studies';

export const taskSchema = z.object({
  label: labelSchema,
  name: z.string().trim().min(1, 'a name').max(200, 'at most 200 characters'),
  /** Seconds; taken from the profile, else 2 s. */
  tr: z
    .number('TR in seconds, as a number')
    .gt(0, 'TR must be more than 0 s')
    .max(60, 'TR is at most 60 s')
    .optional(),
  volumes: z
    .number()
    .int('a whole number of volumes')
    .min(1, 'at least one volume')
    .max(MAX_VOLUMES)
    .optional(),
  profile: z.uuid().nullable().optional(),
  conditions: z.array(z.string().trim().min(1).max(120)).max(100).optional()
});

/** A task that is empty but for its brief, made from what the form or the API says. */
export async function createTask(
  db: Knex,
  where: { lab: string; study: string; author: string },
  given: z.infer<typeof taskSchema>
): Promise<{ task: Task; document: TaskDocument }> {
  const { label, name, conditions = [], ...rest } = accept(taskSchema, given);
  const profile = rest.profile ? (await getProfile(db, where.lab, rest.profile)).profile : null;
  const document = newDocument({
    title: name,
    label,
    tr: toMicros(rest.tr ?? profile?.tr ?? 2),
    volumes: rest.volumes ?? profile?.volumes ?? 200,
    profile: rest.profile ?? null
  });
  for (const condition of conditions)
    document.brief.conditions.push(newCondition(document.brief.conditions, condition));
  return insertTask(db, where, document, [`Made the task ‘${name}’`]);
}

/** A task from a whole document, as its first save. */
export async function insertTask(
  db: Knex,
  { lab, study, author }: { lab: string; study: string; author: string },
  given: unknown,
  words: string[]
): Promise<{ task: Task; document: TaskDocument }> {
  const document = acceptDocument(given);
  await getStudy(db, lab, study);
  await checkAssets(db, lab, document);
  const { label, title: name } = document.brief;
  const { manifest, parts } = splitDocument(document);
  const task = await withTaskLabel(label, () =>
    db.transaction(async (trx) => {
      const made = await tasks(trx).insert(lab, { study, label, name });
      await saves(trx).keepParts(lab, parts);
      await saves(trx).insert(lab, made.id, { number: 1, manifest, author, words });
      await audit(trx).add(lab, author, 'task made', { task: made.id, label, name });
      return made;
    })
  );
  return { task, document };
}

export const listTasks = (db: Knex, labId: string, studyId?: string) => tasks(db).list(labId, studyId);

export async function getTask(db: Knex, labId: string, id: string): Promise<Task> {
  return (await tasks(db).find(labId, id)) ?? notFound('task');
}

/** Hides the task; its sealed revisions are kept. */
export async function removeTask(db: Knex, labId: string, actor: string, id: string): Promise<void> {
  const task = await getTask(db, labId, id);
  await tasks(db).remove(labId, id);
  await audit(db).add(labId, actor, 'task removed', { label: task.label, name: task.name });
}
