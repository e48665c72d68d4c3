import { startSession } from '$lib/server/auth/accounts';
import { notFound } from '$lib/server/errors';
import { createDemoLab, isDemoOffered } from '$lib/server/services/demo/lab';
import { answerForm } from './form-answer';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = () => ({ mayOpenDemo: isDemoOffered() });

export const actions: Actions = {
  demo: async (event) => {
    if (!isDemoOffered()) return notFound();
    return answerForm({}, async () => {
      const { lab, accounts } = await createDemoLab(event.locals.db);
      const owner = accounts.find((one) => one.role === 'owner');
      if (owner) await startSession(event, owner.user);
      return {
        lab,
        accounts: accounts.map(({ role, email, password }) => ({ role, email, password }))
      };
    });
  }
};
