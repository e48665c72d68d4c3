/**
 * The server's start, stop and gate. The gate gives each request its session and refuses what another site could have
 * sent in a signed-in person's name. Who may do what is asked again in every load, action and endpoint.
 */
import { building, dev } from '$app/environment';
import type { Handle, HandleServerError, ServerInit } from '@sveltejs/kit';
import { setCookie } from '$lib/server/auth/accounts';
import { sessionsOf } from '$lib/server/auth/lucia';
import { config } from '$lib/server/config';
import { closeDatabase, database } from '$lib/server/db/client';
import { prepareDatabase } from '$lib/server/db/migrate';
import { canonicalRedirect, isForeign } from '$lib/server/auth/origin';

export const init: ServerInit = async () => {
  if (building) return;
  const { ownerUrl, databaseUrl } = config();
  await prepareDatabase(ownerUrl, databaseUrl);
};

if (!building && !dev) process.on('sveltekit:shutdown', closeDatabase);

export const handle: Handle = async ({ event, resolve }) => {
  const { request, url, cookies, locals } = event;
  const elsewhere = canonicalRedirect(request, url);
  if (elsewhere) return new Response(null, { status: 307, headers: { location: elsewhere } });
  if (isForeign(request, url))
    return Response.json(
      {
        error: {
          code: 'not_allowed',
          message: `This request did not come from a page of ${url.origin}, so it was refused. Reload the page and try again.`
        }
      },
      { status: 403 }
    );

  locals.db = database();
  locals.path = url.pathname + url.search;
  locals.user = null;
  locals.session = null;
  const sessions = sessionsOf(locals.db);
  const id = cookies.get(sessions.sessionCookieName);
  // A request with a token is judged by its token alone.
  if (id && !request.headers.has('authorization')) {
    const { session, user } = await sessions.validateSession(id);
    if (session?.fresh) setCookie(cookies, sessions.createSessionCookie(session.id));
    if (!session) setCookie(cookies, sessions.createBlankSessionCookie());
    locals.session = session;
    locals.user = user && { id: user.id, email: user.email, name: user.name };
  }
  const response = await resolve(event);
  response.headers.set('x-content-type-options', 'nosniff');
  response.headers.set('referrer-policy', 'same-origin');
  return response;
};

export const handleError: HandleServerError = ({ error, event, status, message }) => {
  if (status === 404) return { message: `There is no page at ${event.url.pathname}. Check the address.` };
  console.error(`${event.request.method} ${event.url.pathname} failed`, error);
  return {
    message:
      status < 500
        ? message
        : 'Something went wrong on the server, and it was written to its log. Nothing you saved is lost; try again.'
  };
};
