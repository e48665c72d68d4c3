import { z } from 'zod';
import { endpoint } from '$lib/server/api/endpoint';
import { memberShape } from '$lib/server/api/shapes';
import { changeMember, changeMemberSchema, removeMember } from '$lib/server/services/labs';

const params = z.object({ lab: z.string(), member: z.uuid() });

export const PATCH = endpoint({
  summary: "Change a member's role, or make them deputy for sign-off",
  right: 'manage',
  params,
  body: changeMemberSchema,
  answer: memberShape,
  handler: async ({ db, lab, user, params, body }) => changeMember(db, lab, user.id, params.member, body)
});

export const DELETE = endpoint({
  summary: 'Remove a member; the last owner stays',
  right: 'manage',
  params,
  answer: null,
  handler: async ({ db, lab, user, params }) => removeMember(db, lab, user.id, params.member)
});
