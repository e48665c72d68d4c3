import { download } from '$lib/server/api/download';
import { endpoint, file, TABLE } from '$lib/server/api/endpoint';
import { runParam } from '$lib/server/api/shapes';
import { plannedTable } from '$lib/server/services/runs';

export const GET = endpoint({
  summary: 'Planned event table of a run (BIDS)',
  right: 'read',
  params: runParam,
  answer: file(TABLE),
  handler: async ({ db, lab, params }) =>
    download(await plannedTable(db, lab, params.task, params.run), `${TABLE}; charset=utf-8`, 'events.tsv')
});
