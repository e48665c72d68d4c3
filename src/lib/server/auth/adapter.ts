/** Lucia's store on Knex. */
import type { Adapter, DatabaseSession, DatabaseUser } from 'lucia';
import type { Knex } from 'knex';
import type { SessionRow, UserRow } from '../db/rows';

const toSession = (r: SessionRow): DatabaseSession => ({
  id: r.id,
  userId: r.user_id,
  expiresAt: r.expires_at,
  attributes: {}
});

export class KnexAdapter implements Adapter {
  constructor(private readonly db: Knex) {}
  private sessions() {
    return this.db<SessionRow>('sessions');
  }
  async getSessionAndUser(id: string): Promise<[DatabaseSession | null, DatabaseUser | null]> {
    const row: (SessionRow & Pick<UserRow, 'email' | 'name'>) | undefined = await this.db('sessions as s')
      .join('users as u', 'u.id', 's.user_id')
      .where('s.id', id)
      .first('s.id', 's.user_id', 's.expires_at', 'u.email', 'u.name');
    if (!row) return [null, null];
    return [toSession(row), { id: row.user_id, attributes: { email: row.email, name: row.name } }];
  }
  async getUserSessions(userId: string) {
    return (await this.sessions().where({ user_id: userId }).select('id', 'user_id', 'expires_at')).map(
      toSession
    );
  }
  async setSession(s: DatabaseSession) {
    await this.sessions().insert({ id: s.id, user_id: s.userId, expires_at: s.expiresAt });
  }
  async updateSessionExpiration(id: string, expiresAt: Date) {
    await this.sessions().where({ id }).update({ expires_at: expiresAt });
  }
  async deleteSession(id: string) {
    await this.sessions().where({ id }).del();
  }
  async deleteUserSessions(userId: string) {
    await this.sessions().where({ user_id: userId }).del();
  }
  async deleteExpiredSessions() {
    await this.sessions().where('expires_at', '<=', new Date()).del();
  }
}
