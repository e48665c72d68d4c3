import { redirect } from '@sveltejs/kit';
import { isUuid, requireMember } from '$lib/server/auth/member';
import { notFound } from '$lib/server/errors';
import { listProfiles } from '$lib/server/services/profiles';
import { getStudy } from '$lib/server/services/studies';
import { createTask } from '$lib/server/services/tasks';
import { MAX_VOLUMES } from '$lib/task/schema';
import { answerForm, readForm, readNumber, refuseForm } from '../../../../../form-answer';
import type { Actions, PageServerLoad } from './$types';

const studyId = (params: { study: string }): string =>
  isUuid(params.study) ? params.study : notFound('study');

export const load: PageServerLoad = async ({ locals, params }) => {
  const { lab } = await requireMember(locals, params.lab, 'edit');
  const study = await getStudy(locals.db, lab.id, studyId(params));
  const profiles = await listProfiles(locals.db, lab.id);
  return {
    crumb: [
      { label: 'Labs', href: '/labs' },
      { label: lab.name, href: `/labs/${lab.id}` },
      { label: study.name, href: `/labs/${lab.id}/studies/${study.id}` },
      { label: 'New task' }
    ],
    lab,
    study,
    profiles: profiles.map(({ id, profile }) => ({
      id,
      name: profile.name,
      tr: profile.tr,
      volumes: profile.volumes
    }))
  };
};

export const actions: Actions = {
  default: async ({ locals, params, request }) => {
    const { lab, userId } = await requireMember(locals, params.lab, 'edit');
    const study = studyId(params);
    const typed = await readForm(request);
    const tr = readNumber(typed, 'tr', { what: 'TR', unit: 'seconds', above: 0, most: 60 });
    const volumes = readNumber(typed, 'volumes', {
      what: 'a run',
      unit: 'volumes',
      whole: true,
      above: 0,
      most: MAX_VOLUMES
    });
    const problems = [tr.problem, volumes.problem].filter((one) => one !== null);
    if (tr.value === null || volumes.value === null) return refuseForm(typed, problems);
    const given = {
      name: typed.name ?? '',
      label: typed.label ?? '',
      tr: tr.value,
      volumes: volumes.value,
      profile: typed.profile || null
    };
    return answerForm(typed, async () => {
      const { task } = await createTask(locals.db, { lab: lab.id, study, author: userId }, given);
      redirect(303, `/labs/${lab.id}/tasks/${task.id}/brief`);
    });
  }
};
