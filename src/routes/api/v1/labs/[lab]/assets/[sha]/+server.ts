import { z } from 'zod';
import { endpoint, file } from '$lib/server/api/endpoint';
import { readAsset } from '$lib/server/services/assets';

export const GET = endpoint({
  summary: 'The bytes of a stimulus file',
  right: 'read',
  params: z.object({ lab: z.string(), sha: z.string().regex(/^[0-9a-f]{64}$/) }),
  answer: file('image/*'),
  handler: async ({ db, lab, params, event }) => {
    const etag = `"${params.sha}"`;
    const headers = {
      etag,
      // Private: only this person's browser may keep it.
      'cache-control': 'private, max-age=31536000, immutable',
      'x-content-type-options': 'nosniff',
      'content-security-policy': "default-src 'none'; sandbox"
    };
    const asset = await readAsset(db, lab, params.sha);
    if (event.request.headers.get('if-none-match') === etag)
      return new Response(null, { status: 304, headers });
    return new Response(new Uint8Array(asset.bytes), { headers: { ...headers, 'content-type': asset.mime } });
  }
});
