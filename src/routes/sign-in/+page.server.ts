import { redirect } from '@sveltejs/kit';
import { signIn, startSession } from '$lib/server/auth/accounts';
import { safeNext } from '$lib/server/auth/member';
import { answerForm, readForm } from '../form-answer';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = ({ locals, url }) => {
  const next = url.searchParams.get('next');
  if (locals.user) redirect(303, safeNext(next));
  return { crumb: [{ label: 'Sign in' }], next };
};

export const actions: Actions = {
  default: async (event) => {
    const typed = await readForm(event.request);
    return answerForm(typed, async () => {
      const given = { email: typed.email ?? '', password: typed.password ?? '' };
      const user = await signIn(event.locals.db, given, event.getClientAddress());
      await startSession(event, user);
      redirect(303, safeNext(typed.goOn ?? null));
    });
  }
};
