/** Requests that another site could have sent in a signed-in person's name. SvelteKit's own check covers forms only. */
import { isLoopback } from '../config';

const READS = new Set(['GET', 'HEAD', 'OPTIONS']);

/** A changing request, judged by cookies, that did not come from a page of this origin. */
export const isForeign = (request: Request, url: URL): boolean =>
  !READS.has(request.method) &&
  !request.headers.has('authorization') &&
  request.headers.get('origin') !== url.origin;

/**
 * On one machine `localhost` and `127.0.0.1` are the same server, but not the same origin: lead a page asked for under
 * the other name to the right one, or its forms would be refused. Null when there is nothing to do.
 */
export function canonicalRedirect(request: Request, url: URL): string | null {
  const host = request.headers.get('host');
  if (!host || host === url.host || request.method !== 'GET') return null;
  const address = `${url.protocol}//${host}`;
  if (!URL.canParse(address)) return null;
  const asked = new URL(address);
  const same = asked.port === url.port && isLoopback(asked.hostname) && isLoopback(url.hostname);
  return same ? url.origin + url.pathname + url.search : null;
}
