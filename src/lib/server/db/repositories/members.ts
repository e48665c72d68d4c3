import type { Knex } from 'knex';
import {
  toMember,
  toUser,
  type Member,
  type MembershipRow,
  type Role,
  type User,
  type UserRow
} from '../rows';

export const members = (db: Knex) => {
  const table = () => db<MembershipRow>('memberships');
  const joined = (labId: string) =>
    db('memberships as m')
      .join('users as u', 'u.id', 'm.user_id')
      .where('m.lab_id', labId)
      .select('m.*', 'u.email', 'u.name');
  return {
    async list(labId: string): Promise<Member[]> {
      return (await joined(labId).orderBy('u.name')).map(toMember);
    },
    async find(labId: string, userId: string): Promise<Member | null> {
      const rows = await joined(labId).where('m.user_id', userId);
      return rows[0] ? toMember(rows[0]) : null;
    },
    /** Owners, locked until the transaction ends, so that two changes cannot leave a lab without one. */
    async lockOwners(labId: string): Promise<string[]> {
      const rows = await table()
        .where({ lab_id: labId, role: 'owner' })
        .orderBy('user_id')
        .forUpdate()
        .select('user_id');
      return rows.map((r) => r.user_id);
    },
    async insert(labId: string, userId: string, role: Role): Promise<void> {
      await table().insert({ lab_id: labId, user_id: userId, role });
    },
    async update(labId: string, userId: string, change: { role?: Role; deputy?: boolean }): Promise<void> {
      await table().where({ lab_id: labId, user_id: userId }).update(change);
    },
    async remove(labId: string, userId: string): Promise<void> {
      await table().where({ lab_id: labId, user_id: userId }).del();
    }
  };
};

/** The account of an e-mail address; for adding a member only. */
export async function userByEmail(db: Knex, email: string): Promise<User | null> {
  const row = await db<UserRow>('users').where({ email }).first('id', 'email', 'name');
  return row ? toUser(row) : null;
}
