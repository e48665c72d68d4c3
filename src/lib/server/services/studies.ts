import type { Knex } from 'knex';
import { z } from 'zod';
import { audit } from '../db/repositories/audit';
import { studies } from '../db/repositories/studies';
import type { Study } from '../db/rows';
import { accept, isTaken, notFound, refuse } from '../errors';

export const labelSchema = z
  .string()
  .trim()
  .regex(/^[A-Za-z0-9]{1,60}$/, 'a label of letters and digits only, at most 60');
export const nameSchema = z.string().trim().min(1, 'a name').max(120, 'at most 120 characters');
export const studySchema = z.object({ label: labelSchema, name: nameSchema });
export const changeStudySchema = studySchema
  .partial()
  .refine((c) => c.label !== undefined || c.name !== undefined, 'a new label or a new name');

/** Say which label is taken instead of a failed constraint. */
async function labelOnce<T>(label: string | undefined, work: () => Promise<T>): Promise<T> {
  try {
    return await work();
  } catch (thrown) {
    if (isTaken(thrown, 'studies_label'))
      refuse(409, `This lab has a study with the label ‘${label}’ already. Choose another label.`, {
        details: [{ path: 'label', message: 'is taken in this lab' }]
      });
    throw thrown;
  }
}

export const listStudies = (db: Knex, labId: string) => studies(db).list(labId);

export async function getStudy(db: Knex, labId: string, id: string): Promise<Study> {
  return (await studies(db).find(labId, id)) ?? notFound('study');
}

export async function createStudy(
  db: Knex,
  labId: string,
  actor: string,
  given: z.infer<typeof studySchema>
) {
  const study = accept(studySchema, given);
  return labelOnce(study.label, () =>
    db.transaction(async (trx) => {
      const made = await studies(trx).insert(labId, study);
      await audit(trx).add(labId, actor, 'study made', study);
      return made;
    })
  );
}

export async function changeStudy(
  db: Knex,
  labId: string,
  actor: string,
  id: string,
  given: z.infer<typeof changeStudySchema>
): Promise<Study> {
  const change = accept(changeStudySchema, given);
  await getStudy(db, labId, id);
  await labelOnce(change.label, () => studies(db).update(labId, id, change));
  await audit(db).add(labId, actor, 'study changed', { study: id, ...change });
  return getStudy(db, labId, id);
}

/** Hides a study and its tasks; revisions that were sealed in it are kept. */
export async function removeStudy(db: Knex, labId: string, actor: string, id: string): Promise<void> {
  const study = await getStudy(db, labId, id);
  await db.transaction(async (trx) => {
    await studies(trx).remove(labId, id);
    await trx('tasks')
      .where({ lab_id: labId, study_id: id, deleted_at: null })
      .update({ deleted_at: new Date() });
    await audit(trx).add(labId, actor, 'study removed', { label: study.label, name: study.name });
  });
}
