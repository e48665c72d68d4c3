import { endpoint } from '$lib/server/api/endpoint';
import { profileParam, profileShape } from '$lib/server/api/shapes';
import { getProfile, updateProfile } from '$lib/server/services/profiles';
import { profileSchema } from '$lib/task/profile';

export const GET = endpoint({
  summary: 'A scanner profile, with its version as ETag',
  right: 'read',
  params: profileParam,
  answer: profileShape,
  versioned: 'etag',
  handler: async ({ db, lab, params, event }) => {
    const stored = await getProfile(db, lab, params.profile);
    event.setHeaders({ etag: `"${stored.version}"` });
    return stored;
  }
});

export const PUT = endpoint({
  summary: 'Save a scanner profile as a new version; older versions are kept',
  right: 'manage',
  params: profileParam,
  body: profileSchema,
  answer: profileShape,
  versioned: 'if-match',
  handler: async ({ db, lab, user, params, body, base, event }) => {
    const stored = await updateProfile(db, lab, user.id, params.profile, body, base);
    event.setHeaders({ etag: `"${stored.version}"` });
    return stored;
  }
});
