import type { Knex } from 'knex';
import { hashOf } from '$lib/task/canonical';
import { profileSchema, type Profile } from '$lib/task/profile';
import { audit } from '../db/repositories/audit';
import { profiles } from '../db/repositories/profiles';
import type { StoredProfile } from '../db/rows';
import { accept, notFound, refuse } from '../errors';

export const listProfiles = (db: Knex, labId: string) => profiles(db).list(labId);

export async function getProfile(db: Knex, labId: string, id: string): Promise<StoredProfile> {
  return (await profiles(db).find(labId, id)) ?? notFound('scanner profile');
}

/** What zod cannot see field by field. */
function check(profile: Profile): void {
  if (
    profile.acquisitionTime !== null &&
    profile.acquisitionStart + profile.acquisitionTime > profile.tr + 1e-9
  )
    refuse(
      422,
      `Acquisition from ${profile.acquisitionStart} s for ${profile.acquisitionTime} s does not fit into a TR of ${profile.tr} s: shorten it or begin earlier.`,
      { details: [{ path: 'acquisitionTime', message: 'ends after the TR' }] }
    );
  const codes = profile.responseKeys.map((k) => k.code);
  const fingers = profile.responseKeys.map((k) => k.finger);
  const twice =
    codes.find((c, i) => codes.indexOf(c) !== i) ?? fingers.find((f, i) => fingers.indexOf(f) !== i);
  if (twice)
    refuse(422, `‘${twice}’ stands twice among the response keys; each key and each finger is named once.`, {
      details: [{ path: 'responseKeys', message: `${twice} stands twice` }]
    });
}

export async function createProfile(
  db: Knex,
  labId: string,
  author: string,
  given: unknown
): Promise<StoredProfile> {
  const body = accept(profileSchema, given);
  check(body);
  const id = await db.transaction(async (trx) => {
    const made = await profiles(trx).insert(labId, { hash: hashOf(body), body, author });
    await audit(trx).add(labId, author, 'scanner profile made', { profile: made, name: body.name });
    return made;
  });
  return getProfile(db, labId, id);
}

/** A new version; the old ones stay, since bundles and logs name them by hash. Unchanged content makes no version. */
export async function updateProfile(
  db: Knex,
  labId: string,
  author: string,
  id: string,
  given: unknown,
  /** Version that the edit was made on; null to skip the check. */
  base: number | null = null
): Promise<StoredProfile> {
  const body = accept(profileSchema, given);
  check(body);
  await db.transaction(async (trx) => {
    const row = (await profiles(trx).lock(labId, id)) ?? notFound('scanner profile');
    if (base !== null && row.version !== base)
      refuse(
        412,
        `This profile is at version ${row.version}, and your edit was made on version ${base}: reload it, then edit again.`
      );
    const hash = hashOf(body);
    if ((await getProfile(trx, labId, id)).hash === hash) return;
    await profiles(trx).addVersion(labId, id, { version: row.version + 1, hash, body, author });
    await audit(trx).add(labId, author, 'scanner profile changed', { profile: id, version: row.version + 1 });
  });
  return getProfile(db, labId, id);
}
