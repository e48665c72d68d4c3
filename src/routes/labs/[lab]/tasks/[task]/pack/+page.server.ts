import { requireMember } from '$lib/server/auth/member';
import { listProfiles } from '$lib/server/services/profiles';
import { listRevisions } from '$lib/server/services/revisions';
import { getTask } from '$lib/server/services/tasks';
import type { PageServerLoad } from './$types';

export const load: PageServerLoad = async ({ locals, params, depends }) => {
  depends('task:snapshots');
  const { lab } = await requireMember(locals, params.lab, 'read');
  const task = await getTask(locals.db, lab.id, params.task);
  const [profiles, snapshots] = await Promise.all([
    listProfiles(locals.db, lab.id),
    listRevisions(locals.db, lab.id, task.id)
  ]);
  return {
    profiles: profiles.map(({ id, hash, profile }) => ({ id, hash, profile })),
    snapshots: snapshots.map(({ id, hash, saveNumber, sealedAt }) => ({ id, hash, saveNumber, sealedAt }))
  };
};
