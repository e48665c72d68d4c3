import { redirect } from '@sveltejs/kit';
import { signUp, signUpSchema, startSession } from '$lib/server/auth/accounts';
import { safeNext } from '$lib/server/auth/member';
import { accept } from '$lib/server/errors';
import { answerForm, readForm } from '../form-answer';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = ({ locals, url }) => {
  const next = url.searchParams.get('next');
  if (locals.user) redirect(303, safeNext(next));
  return { crumb: [{ label: 'Sign up' }], next };
};

export const actions: Actions = {
  default: async (event) => {
    const typed = await readForm(event.request);
    return answerForm(typed, async () => {
      const account = accept(signUpSchema, {
        name: typed.name ?? '',
        email: typed.email ?? '',
        password: typed.password ?? ''
      });
      await startSession(event, await signUp(event.locals.db, account));
      redirect(303, safeNext(typed.goOn ?? null));
    });
  }
};
