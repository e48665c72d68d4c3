import type { Knex } from 'knex';

export interface AuditEntry {
  at: Date;
  actor: string | null;
  action: string;
  details: Record<string, unknown>;
}

/** What was done in a lab, by whom; only ever added to. */
export const audit = (db: Knex) => ({
  async add(labId: string, actor: string | null, action: string, details: Record<string, unknown> = {}) {
    await db('audit').insert({ lab_id: labId, actor, action, details: JSON.stringify(details) });
  },
  async latest(labId: string, limit = 50): Promise<AuditEntry[]> {
    return db('audit as a')
      .leftJoin('users as u', 'u.id', 'a.actor')
      .where('a.lab_id', labId)
      .orderBy('a.id', 'desc')
      .limit(limit)
      .select('a.at', 'u.name as actor', 'a.action', 'a.details');
  }
});
