import { redirect, type RequestEvent } from '@sveltejs/kit';
import { can, requireMember, type Membership } from '$lib/server/auth/member';
import type { Role } from '$lib/server/db/rows';
import { addMember, changeMember, listMembers, removeMember } from '$lib/server/services/labs';
import { answerForm, readForm, type Typed } from '../../../form-answer';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = async ({ locals, params }) => {
  const { lab, role, userId } = await requireMember(locals, params.lab, 'read');
  return {
    crumb: [
      { label: 'Labs', href: '/labs' },
      { label: lab.name, href: `/labs/${lab.id}` },
      { label: 'Members' }
    ],
    lab,
    me: userId,
    mayManage: can(role, 'manage'),
    members: await listMembers(locals.db, lab.id)
  };
};

/** An action of an owner's; `say` gives the sentence shown afterwards. */
const asOwner =
  (say: (event: RequestEvent, member: Membership, typed: Typed) => Promise<string>) =>
  async (event: RequestEvent) => {
    const member = await requireMember(event.locals, event.params.lab ?? '', 'manage');
    const typed = await readForm(event.request);
    return answerForm(typed, async () => ({ done: await say(event, member, typed) }));
  };

export const actions: Actions = {
  add: asOwner(async ({ locals }, { lab, userId }, typed) => {
    const given = { email: typed.email ?? '', role: typed.role as Role };
    const added = await addMember(locals.db, lab.id, userId, given);
    return `${added.name} is now ${added.role} of ${lab.name}.`;
  }),
  change: asOwner(async ({ locals }, { lab, userId }, typed) => {
    const changed = await changeMember(locals.db, lab.id, userId, typed.member ?? '', {
      role: typed.role as Role
    });
    return `${changed.name} is now ${changed.role}.`;
  }),
  remove: asOwner(async ({ locals }, { lab, userId }, typed) => {
    await removeMember(locals.db, lab.id, userId, typed.member ?? '');
    if (typed.member === userId) redirect(303, '/labs');
    return `${typed.name || 'The member'} was removed from ${lab.name}.`;
  })
};
