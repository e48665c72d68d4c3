import { endpoint } from '$lib/server/api/endpoint';
import { studyParam, studyShape } from '$lib/server/api/shapes';
import { changeStudy, changeStudySchema, getStudy, removeStudy } from '$lib/server/services/studies';

export const GET = endpoint({
  summary: 'A study',
  right: 'read',
  params: studyParam,
  answer: studyShape,
  handler: async ({ db, lab, params }) => getStudy(db, lab, params.study)
});

export const PATCH = endpoint({
  summary: 'Change the label or name of a study',
  right: 'edit',
  params: studyParam,
  body: changeStudySchema,
  answer: studyShape,
  handler: async ({ db, lab, user, params, body }) => changeStudy(db, lab, user.id, params.study, body)
});

export const DELETE = endpoint({
  summary: 'Remove a study and its tasks; sealed revisions are kept',
  right: 'edit',
  params: studyParam,
  answer: null,
  handler: async ({ db, lab, user, params }) => removeStudy(db, lab, user.id, params.study)
});
