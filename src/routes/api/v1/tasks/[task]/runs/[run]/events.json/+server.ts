import { download } from '$lib/server/api/download';
import { endpoint, file } from '$lib/server/api/endpoint';
import { runParam } from '$lib/server/api/shapes';
import { plannedSidecar } from '$lib/server/services/runs';

export const GET = endpoint({
  summary: "Sidecar of a run's planned event table (BIDS)",
  right: 'read',
  params: runParam,
  answer: file('application/json'),
  handler: async ({ db, lab, params }) =>
    download(await plannedSidecar(db, lab, params.task, params.run), 'application/json', 'events.json')
});
