import { endpoint } from '$lib/server/api/endpoint';
import { assetShape, labParam, list, whole } from '$lib/server/api/shapes';
import { listAssets, uploadPicture } from '$lib/server/services/assets';

export const GET = endpoint({
  summary: 'Stimulus files of a lab',
  right: 'read',
  params: labParam,
  answer: list(assetShape),
  handler: async ({ db, lab }) => whole(await listAssets(db, lab))
});

export const POST = endpoint({
  summary: 'Upload a picture (PNG, JPEG, GIF or WebP) in the field `file`',
  right: 'edit',
  params: labParam,
  body: 'multipart/form-data',
  answer: assetShape,
  status: 201,
  handler: async ({ db, lab, user, event }) => uploadPicture(db, lab, user.id, event.request)
});
