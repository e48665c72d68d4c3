import { can, requireMember } from '$lib/server/auth/member';
import { loadDesk, recentChanges } from '$lib/server/services/desk';
import type { PageServerLoad } from './$types';

export const load: PageServerLoad = async ({ locals, params }) => {
  const { lab, role } = await requireMember(locals, params.lab, 'read');
  return {
    crumb: [{ label: 'Labs', href: '/labs' }, { label: lab.name }],
    lab,
    role,
    mayEdit: can(role, 'edit'),
    mayManage: can(role, 'manage'),
    ...(await loadDesk(locals.db, lab.id)),
    changes: await recentChanges(locals.db, lab.id)
  };
};
