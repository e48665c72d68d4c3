import { z } from 'zod';
import { endpoint } from '$lib/server/api/endpoint';
import { list, rehearsalShape, taskParam, whole } from '$lib/server/api/shapes';
import { keepRehearsal, listRehearsals, rehearsalSchema } from '$lib/server/services/rehearsals';

export const GET = endpoint({
  summary: 'Rehearsals kept of a task, latest first',
  right: 'read',
  params: taskParam,
  answer: list(rehearsalShape),
  handler: async ({ db, lab, params }) => whole(await listRehearsals(db, lab, params.task))
});

export const POST = endpoint({
  summary: "Keep a rehearsal's report; a reader's is not kept",
  right: 'rehearse',
  params: taskParam,
  body: rehearsalSchema,
  answer: z.object({ kept: z.boolean(), id: z.uuid().nullable() }),
  status: 201,
  handler: async ({ db, lab, member, user, params, body }) =>
    keepRehearsal(db, { lab, task: params.task, author: user.id, role: member.role }, body)
});
