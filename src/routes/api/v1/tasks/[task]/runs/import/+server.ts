import { importShape } from '$lib/server/api/design-shape';
import { endpoint, TABLE } from '$lib/server/api/endpoint';
import { taskParam } from '$lib/server/api/shapes';
import { importQuery, importRun } from '$lib/server/services/runs';

export const POST = endpoint({
  summary: 'An event table becomes a run; the answer says what was made, what was skipped and why',
  right: 'edit',
  params: taskParam,
  query: importQuery,
  body: TABLE,
  answer: importShape,
  status: 201,
  handler: async ({ db, lab, user, params, query, bytes, event }) => {
    const imported = await importRun(db, { lab, task: params.task, author: user.id }, bytes, query);
    event.setHeaders({ etag: `"${imported.saveNumber}"` });
    return imported;
  }
});
