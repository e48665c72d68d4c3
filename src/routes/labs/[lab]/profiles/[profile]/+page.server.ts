import { requireMember } from '$lib/server/auth/member';
import { getProfile } from '$lib/server/services/profiles';
import type { PageServerLoad } from './$types';

export const load: PageServerLoad = async ({ locals, params }) => {
  const { lab, role } = await requireMember(locals, params.lab, 'read');
  const stored = await getProfile(locals.db, lab.id, params.profile);
  return {
    role,
    stored,
    crumb: [
      { label: lab.name, href: `/labs/${lab.id}` },
      { label: 'Scanner profiles', href: `/labs/${lab.id}/profiles` },
      { label: stored.profile.name }
    ]
  };
};
