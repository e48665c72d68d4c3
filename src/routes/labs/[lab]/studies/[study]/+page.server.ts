import { redirect } from '@sveltejs/kit';
import { can, isUuid, requireMember } from '$lib/server/auth/member';
import { notFound } from '$lib/server/errors';
import { loadDesk } from '$lib/server/services/desk';
import { changeStudy, getStudy, removeStudy } from '$lib/server/services/studies';
import { answerForm, readForm } from '../../../../form-answer';
import type { Actions, PageServerLoad } from './$types';

const studyId = (params: { study: string }): string =>
  isUuid(params.study) ? params.study : notFound('study');

export const load: PageServerLoad = async ({ locals, params }) => {
  const { lab, role } = await requireMember(locals, params.lab, 'read');
  const study = await getStudy(locals.db, lab.id, studyId(params));
  const { tasks } = await loadDesk(locals.db, lab.id, study.id);
  return {
    crumb: [
      { label: 'Labs', href: '/labs' },
      { label: lab.name, href: `/labs/${lab.id}` },
      { label: study.name }
    ],
    lab,
    study,
    tasks,
    mayEdit: can(role, 'edit')
  };
};

export const actions: Actions = {
  change: async ({ locals, params, request }) => {
    const { lab, userId } = await requireMember(locals, params.lab, 'edit');
    const typed = await readForm(request);
    return answerForm(typed, async () => {
      const given = { name: typed.name ?? '', label: typed.label ?? '' };
      const study = await changeStudy(locals.db, lab.id, userId, studyId(params), given);
      return { done: `The study is now ‘${study.name}’ with the label ${study.label}.` };
    });
  },
  remove: async ({ locals, params }) => {
    const { lab, userId } = await requireMember(locals, params.lab, 'edit');
    await removeStudy(locals.db, lab.id, userId, studyId(params));
    redirect(303, `/labs/${lab.id}`);
  }
};
