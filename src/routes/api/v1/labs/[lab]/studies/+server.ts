import { endpoint } from '$lib/server/api/endpoint';
import { labParam, list, studyShape, whole } from '$lib/server/api/shapes';
import { createStudy, listStudies, studySchema } from '$lib/server/services/studies';

export const GET = endpoint({
  summary: 'Studies of a lab',
  right: 'read',
  params: labParam,
  answer: list(studyShape),
  handler: async ({ db, lab }) => whole(await listStudies(db, lab))
});

export const POST = endpoint({
  summary: 'Make a study',
  right: 'edit',
  params: labParam,
  body: studySchema,
  answer: studyShape,
  status: 201,
  handler: async ({ db, lab, user, body }) => createStudy(db, lab, user.id, body)
});
