import { redirect } from '@sveltejs/kit';
import { endSession } from '$lib/server/auth/accounts';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = ({ locals }) => {
  if (!locals.user) redirect(303, '/');
  return { crumb: [{ label: 'Sign out' }] };
};

export const actions: Actions = {
  default: async (event) => {
    await endSession(event);
    redirect(303, '/');
  }
};
