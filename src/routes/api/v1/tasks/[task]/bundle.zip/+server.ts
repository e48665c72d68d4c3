import { z } from 'zod';
import { download } from '$lib/server/api/download';
import { endpoint, file } from '$lib/server/api/endpoint';
import { taskParam } from '$lib/server/api/shapes';
import { packDraft } from '$lib/server/services/bundles';

const query = z.object({
  kind: z.enum(['proof', 'practice'], 'proof or practice; a collection bundle needs a signed-off revision'),
  profile: z.uuid('the id of a scanner profile').optional()
});

export const GET = endpoint({
  summary: 'A bundle of the task as it is now; its content is sealed first',
  right: 'pack-proof',
  params: taskParam,
  query,
  answer: file('application/zip'),
  handler: async ({ db, member, user, params, query }) => {
    const kind = query.kind === 'proof' ? 'PROOF' : 'PRACTICE';
    const request = {
      lab: member.lab,
      task: params.task,
      kind,
      profile: query.profile,
      by: user.id
    } as const;
    const { name, bytes } = await packDraft(db, request);
    return download(bytes, 'application/zip', name);
  }
});
