import { endpoint } from '$lib/server/api/endpoint';
import { labParam, list, memberShape, whole } from '$lib/server/api/shapes';
import { addMember, addMemberSchema, listMembers } from '$lib/server/services/labs';

export const GET = endpoint({
  summary: 'Members of a lab',
  right: 'read',
  params: labParam,
  answer: list(memberShape),
  handler: async ({ db, lab }) => whole(await listMembers(db, lab))
});

export const POST = endpoint({
  summary: 'Add somebody who has an account',
  right: 'manage',
  params: labParam,
  body: addMemberSchema,
  answer: memberShape,
  status: 201,
  handler: async ({ db, lab, user, body }) => addMember(db, lab, user.id, body)
});
