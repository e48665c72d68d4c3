import { endpoint } from '$lib/server/api/endpoint';
import { labParam, labWithRoleShape } from '$lib/server/api/shapes';
import { labSchema, renameLab } from '$lib/server/services/labs';

export const GET = endpoint({
  summary: 'A lab, with my role in it',
  right: 'read',
  params: labParam,
  answer: labWithRoleShape,
  handler: async ({ member }) => ({ ...member.lab, role: member.role })
});

export const PATCH = endpoint({
  summary: 'Rename a lab',
  right: 'manage',
  params: labParam,
  body: labSchema,
  answer: labWithRoleShape,
  handler: async ({ db, lab, user, member, body }) => {
    await renameLab(db, lab, user.id, body);
    return { ...member.lab, name: body.name, role: member.role };
  }
});
