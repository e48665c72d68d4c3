import { z } from 'zod';
import { endpoint } from '$lib/server/api/endpoint';
import { revisionShape } from '$lib/server/api/shapes';
import { documentSchema } from '$lib/task/schema';
import { documentOfRevision, getRevision } from '$lib/server/services/revisions';

export const GET = endpoint({
  summary: 'A sealed revision with its document',
  right: 'read',
  params: z.object({ revision: z.string() }),
  answer: revisionShape.extend({ document: documentSchema }),
  handler: async ({ db, lab, params }) => ({
    ...(await getRevision(db, lab, params.revision)),
    document: await documentOfRevision(db, lab, params.revision)
  })
});
