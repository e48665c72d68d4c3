import type { RequestHandler } from '@sveltejs/kit';
import { endpoint } from '$lib/server/api/endpoint';
import { refuse } from '$lib/server/errors';

/** An address that is no call at all is refused in the API's own shape. */
export const fallback: RequestHandler = endpoint({
  summary: 'Not there',
  right: 'public',
  answer: null,
  handler: async ({ event }) =>
    refuse(
      404,
      `There is no call ${event.request.method} ${event.url.pathname}. GET /api/v1/openapi.json lists them all.`
    )
});
