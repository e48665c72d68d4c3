import { endpoint } from '$lib/server/api/endpoint';
import { list, revisionShape, taskParam, whole } from '$lib/server/api/shapes';
import { listRevisions } from '$lib/server/services/revisions';
import { getTask } from '$lib/server/services/tasks';

export const GET = endpoint({
  summary: 'Sealed revisions of a task, latest first',
  right: 'read',
  params: taskParam,
  answer: list(revisionShape),
  handler: async ({ db, lab, params }) => {
    await getTask(db, lab, params.task);
    return whole(await listRevisions(db, lab, params.task));
  }
});
