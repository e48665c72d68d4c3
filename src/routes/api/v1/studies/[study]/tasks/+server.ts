import { endpoint } from '$lib/server/api/endpoint';
import { documentShape, list, studyParam, taskShape, whole } from '$lib/server/api/shapes';
import { getStudy } from '$lib/server/services/studies';
import { createTask, listTasks, taskSchema } from '$lib/server/services/tasks';

export const GET = endpoint({
  summary: 'Tasks of a study',
  right: 'read',
  params: studyParam,
  answer: list(taskShape),
  handler: async ({ db, lab, params }) => {
    await getStudy(db, lab, params.study);
    return whole(await listTasks(db, lab, params.study));
  }
});

export const POST = endpoint({
  summary: 'Make a task; the answer holds its document',
  right: 'edit',
  params: studyParam,
  body: taskSchema,
  answer: taskShape.extend(documentShape.shape),
  status: 201,
  handler: async ({ db, lab, user, params, body }) => {
    const { task, document } = await createTask(db, { lab, study: params.study, author: user.id }, body);
    return { ...task, document };
  }
});
