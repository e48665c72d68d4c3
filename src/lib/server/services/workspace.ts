/** What a task's pages need, in one call: who is asking, the study, the document and the profile it is planned with. */
import { hashOf } from '$lib/task/canonical';
import { defaultProfile, type Profile } from '$lib/task/profile';
import { requireMember, type Right } from '../auth/member';
import { profiles } from '../db/repositories/profiles';
import { notFound } from '../errors';
import { isUuid } from '../auth/member';
import { currentDocument } from './documents';
import { getStudy } from './studies';

export async function loadTask(locals: App.Locals, labId: string, taskId: string, right: Right = 'read') {
  const { lab, role } = await requireMember(locals, labId, right);
  if (!isUuid(taskId)) return notFound('task');
  const { task, document } = await currentDocument(locals.db, labId, taskId);
  const study = await getStudy(locals.db, labId, task.study);
  const wanted = document.brief.profile;
  // A profile that is gone leaves the document readable: it is then planned with the defaults.
  const stored = wanted ? await profiles(locals.db).find(labId, wanted) : null;
  const profile: Profile | null = stored?.profile ?? null;
  return {
    lab,
    role,
    study,
    task: { id: task.id, saveNumber: task.saveNumber, document },
    profile,
    profileHash: stored?.hash ?? hashOf(defaultProfile())
  };
}
