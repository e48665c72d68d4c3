import { endpoint } from '$lib/server/api/endpoint';
import { labParam, list, profileShape, whole } from '$lib/server/api/shapes';
import { createProfile, listProfiles } from '$lib/server/services/profiles';
import { profileSchema } from '$lib/task/profile';

export const GET = endpoint({
  summary: 'Scanner profiles of a lab, each in its present version',
  right: 'read',
  params: labParam,
  answer: list(profileShape),
  handler: async ({ db, lab }) => whole(await listProfiles(db, lab))
});

export const POST = endpoint({
  summary: 'Make a scanner profile; what is left out gets its default',
  right: 'manage',
  params: labParam,
  body: profileSchema,
  answer: profileShape,
  status: 201,
  handler: async ({ db, lab, user, body }) => createProfile(db, lab, user.id, body)
});
