import { redirect } from '@sveltejs/kit';
import { requireUser } from '$lib/server/auth/member';
import { createLab, listLabs } from '$lib/server/services/labs';
import { answerForm, readForm } from '../form-answer';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = async ({ locals }) => ({
  crumb: [{ label: 'Labs' }],
  labs: await listLabs(locals.db, requireUser(locals).id)
});

export const actions: Actions = {
  default: async ({ locals, request }) => {
    const user = requireUser(locals);
    const typed = await readForm(request);
    return answerForm(typed, async () => {
      const lab = await createLab(locals.db, user.id, { name: typed.name ?? '' });
      redirect(303, `/labs/${lab.id}`);
    });
  }
};
