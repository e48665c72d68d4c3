import type { Knex } from 'knex';
import { toLab, type Lab, type LabRow, type MembershipRow, type Role } from '../rows';

/** Labs as one person sees them. */
export const labs = (db: Knex) => ({
  async ofUser(userId: string): Promise<(Lab & { role: Role })[]> {
    const rows: (LabRow & Pick<MembershipRow, 'role'>)[] = await db('labs as l')
      .join('memberships as m', 'm.lab_id', 'l.id')
      .where('m.user_id', userId)
      .orderBy('l.name')
      .select('l.*', 'm.role');
    return rows.map((r) => ({ ...toLab(r), role: r.role }));
  },

  /** The lab with this person's membership, or null: there is no other way to read a lab. */
  async withMember(labId: string, userId: string): Promise<{ lab: Lab; role: Role; deputy: boolean } | null> {
    const row: (LabRow & MembershipRow) | undefined = await db('labs as l')
      .join('memberships as m', 'm.lab_id', 'l.id')
      .where({ 'm.user_id': userId, 'l.id': labId })
      .first('l.*', 'm.role', 'm.deputy');
    return row ? { lab: toLab(row), role: row.role, deputy: row.deputy } : null;
  },

  async insert(name: string, demo = false): Promise<Lab> {
    const rows = await db<LabRow>('labs').insert({ name, demo }).returning('*');
    return toLab(rows[0]!);
  },

  async rename(labId: string, name: string): Promise<void> {
    await db<LabRow>('labs').where({ id: labId }).update({ name });
  }
});
