import { requireMember } from '$lib/server/auth/member';
import { listProfiles } from '$lib/server/services/profiles';
import type { PageServerLoad } from './$types';

export const load: PageServerLoad = async ({ locals, params }) => {
  const { lab, role } = await requireMember(locals, params.lab, 'read');
  return {
    role,
    profiles: await listProfiles(locals.db, lab.id),
    crumb: [{ label: lab.name, href: `/labs/${lab.id}` }, { label: 'Scanner profiles' }]
  };
};
