import type { Knex } from 'knex';
import { profileSchema, type Profile } from '$lib/task/profile';
import type { ProfileRow, ProfileVersionRow, StoredProfile } from '../rows';

type Joined = ProfileRow & ProfileVersionRow;
const toStored = (r: Joined): StoredProfile => ({
  id: r.profile_id,
  version: r.version,
  hash: r.hash,
  savedAt: r.saved_at,
  profile: profileSchema.parse(r.body)
});

/** A profile keeps every version it ever had; the row in `profiles` points to the present one. */
export const profiles = (db: Knex) => {
  const current = (labId: string) =>
    db('profiles as p')
      .join('profile_versions as v', function () {
        this.on('v.lab_id', 'p.lab_id').andOn('v.profile_id', 'p.id').andOn('v.version', 'p.version');
      })
      .where('p.lab_id', labId)
      .select('v.*');
  const addVersion = (
    labId: string,
    id: string,
    v: { version: number; hash: string; body: Profile; author: string }
  ) =>
    db('profile_versions').insert({
      lab_id: labId,
      profile_id: id,
      version: v.version,
      hash: v.hash,
      body: JSON.stringify(v.body),
      author: v.author
    });
  return {
    async list(labId: string): Promise<StoredProfile[]> {
      return (await current(labId).orderBy('p.name')).map(toStored);
    },
    async find(labId: string, id: string): Promise<StoredProfile | null> {
      const rows = await current(labId).where('p.id', id);
      return rows[0] ? toStored(rows[0]) : null;
    },
    async insert(labId: string, v: { hash: string; body: Profile; author: string }): Promise<string> {
      const rows = await db<ProfileRow>('profiles')
        .insert({ lab_id: labId, name: v.body.name, version: 1 })
        .returning('id');
      await addVersion(labId, rows[0]!.id, { version: 1, ...v });
      return rows[0]!.id;
    },
    async lock(labId: string, id: string): Promise<ProfileRow | null> {
      return (await db<ProfileRow>('profiles').where({ lab_id: labId, id }).forUpdate().first()) ?? null;
    },
    async addVersion(
      labId: string,
      id: string,
      v: { version: number; hash: string; body: Profile; author: string }
    ) {
      await addVersion(labId, id, v);
      await db<ProfileRow>('profiles')
        .where({ lab_id: labId, id })
        .update({ version: v.version, name: v.body.name });
    }
  };
};
