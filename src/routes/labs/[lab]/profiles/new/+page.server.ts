import { requireMember } from '$lib/server/auth/member';
import type { PageServerLoad } from './$types';

export const load: PageServerLoad = async ({ locals, params }) => {
  const { lab } = await requireMember(locals, params.lab, 'manage');
  return {
    crumb: [
      { label: lab.name, href: `/labs/${lab.id}` },
      { label: 'Scanner profiles', href: `/labs/${lab.id}/profiles` },
      { label: 'New profile' }
    ]
  };
};
