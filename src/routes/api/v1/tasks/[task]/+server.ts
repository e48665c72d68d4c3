import { endpoint } from '$lib/server/api/endpoint';
import { taskParam, taskShape } from '$lib/server/api/shapes';
import { getTask, removeTask } from '$lib/server/services/tasks';

export const GET = endpoint({
  summary: 'A task, without its document',
  right: 'read',
  params: taskParam,
  answer: taskShape,
  handler: async ({ db, lab, params }) => getTask(db, lab, params.task)
});

export const DELETE = endpoint({
  summary: 'Remove a task; its sealed revisions are kept',
  right: 'edit',
  params: taskParam,
  answer: null,
  handler: async ({ db, lab, user, params }) => removeTask(db, lab, user.id, params.task)
});
