import type { Knex } from 'knex';
import { toStudy, type Study, type StudyRow } from '../rows';

export const studies = (db: Knex) => {
  const live = (labId: string) => db<StudyRow>('studies').where({ lab_id: labId, deleted_at: null });
  return {
    async list(labId: string): Promise<Study[]> {
      return (await live(labId).orderBy('name')).map(toStudy);
    },
    async find(labId: string, id: string): Promise<Study | null> {
      const row = await live(labId).andWhere({ id }).first();
      return row ? toStudy(row) : null;
    },
    async insert(labId: string, study: { label: string; name: string }): Promise<Study> {
      const rows = await db<StudyRow>('studies')
        .insert({ lab_id: labId, ...study })
        .returning('*');
      return toStudy(rows[0]!);
    },
    async update(labId: string, id: string, change: { label?: string; name?: string }): Promise<void> {
      await live(labId).andWhere({ id }).update(change);
    },
    /** Hides the study; what was sealed in it stays. */
    async remove(labId: string, id: string): Promise<void> {
      await live(labId).andWhere({ id }).update({ deleted_at: new Date() });
    }
  };
};
