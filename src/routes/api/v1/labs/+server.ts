import { z } from 'zod';
import { endpoint } from '$lib/server/api/endpoint';
import { labWithRoleShape, list, whole } from '$lib/server/api/shapes';
import { createLab, labSchema, listLabs } from '$lib/server/services/labs';

export const GET = endpoint({
  summary: 'My labs, with my role in each',
  right: 'signed-in',
  answer: list(labWithRoleShape),
  handler: async ({ db, user }) => whole(await listLabs(db, user.id))
});

export const POST = endpoint({
  summary: 'Make a lab and own it',
  right: 'signed-in',
  body: labSchema,
  answer: labWithRoleShape.extend({ role: z.literal('owner') }),
  status: 201,
  handler: async ({ db, user, body }) => ({
    ...(await createLab(db, user.id, body)),
    role: 'owner' as const
  })
});
