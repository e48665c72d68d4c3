import { redirect } from '@sveltejs/kit';
import { requireMember } from '$lib/server/auth/member';
import { createStudy } from '$lib/server/services/studies';
import { answerForm, readForm } from '../../../../form-answer';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = async ({ locals, params }) => {
  const { lab } = await requireMember(locals, params.lab, 'edit');
  return {
    crumb: [
      { label: 'Labs', href: '/labs' },
      { label: lab.name, href: `/labs/${lab.id}` },
      { label: 'New study' }
    ],
    lab
  };
};

export const actions: Actions = {
  default: async ({ locals, params, request }) => {
    const { lab, userId } = await requireMember(locals, params.lab, 'edit');
    const typed = await readForm(request);
    return answerForm(typed, async () => {
      const given = { name: typed.name ?? '', label: typed.label ?? '' };
      const study = await createStudy(locals.db, lab.id, userId, given);
      redirect(303, `/labs/${lab.id}/studies/${study.id}/new-task`);
    });
  }
};
