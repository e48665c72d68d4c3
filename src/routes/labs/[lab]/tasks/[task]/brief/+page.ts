import { call } from '$lib/editor/forms/client';
import type { PageLoad } from './$types';

interface ProfileRow {
  id: string;
  name: string;
}

/** The lab's scanner profiles, to choose from; without them the brief still opens. */
export const load: PageLoad = async ({ params, fetch }) => {
  const answer = await call<{ items: ProfileRow[] }>(`/api/v1/labs/${params.lab}/profiles`, undefined, fetch);
  return { profiles: answer.ok ? answer.value.items.map(({ id, name }) => ({ id, name })) : [] };
};
