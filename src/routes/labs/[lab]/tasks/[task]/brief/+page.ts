import { call } from '$lib/editor/forms/client';
import type { Profile } from '$lib/task/profile';
import type { PageLoad } from './$types';

/** The lab's scanner profiles, to choose from; without them the brief still opens. */
export const load: PageLoad = async ({ params, fetch }) => {
  const path = `/api/v1/labs/${params.lab}/profiles`;
  const answer = await call<{ items: { id: string; profile: Profile }[] }>(path, undefined, fetch);
  return { profiles: answer.ok ? answer.value.items.map(({ id, profile }) => ({ id, profile })) : [] };
};
