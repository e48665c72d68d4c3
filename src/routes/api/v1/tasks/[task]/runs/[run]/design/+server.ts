import { designShape } from '$lib/server/api/design-shape';
import { endpoint } from '$lib/server/api/endpoint';
import { runParam } from '$lib/server/api/shapes';
import { designQuery, runDesign } from '$lib/server/services/runs';

export const GET = endpoint({
  summary: 'Regressors, efficiency, variance inflation, correlations and notices of a run',
  right: 'read',
  params: runParam,
  query: designQuery,
  answer: designShape,
  handler: async ({ db, lab, params, query }) => runDesign(db, lab, params.task, params.run, query)
});
