/** Calls an API route as SvelteKit would, signed in as somebody. */
import type { RequestEvent } from '@sveltejs/kit';
import type { Knex } from 'knex';
import type { User } from '$lib/server/db/rows';
import { collect, type Entry, type Method } from '$lib/server/api/registry';

const modules = import.meta.glob<object>('/src/routes/api/v1/**/+server.ts', { eager: true });
export const registry: Entry[] = collect(modules);
export const ORIGIN = 'http://ebbline.test';

export interface CallOptions {
  query?: Record<string, string>;
  headers?: Record<string, string>;
  /** Sent as JSON, unless it is a string, bytes or a form. */
  body?: unknown;
}
export interface Answer {
  status: number;
  headers: Headers;
  // eslint-disable-next-line @typescript-eslint/no-explicit-any -- tests look at any shape
  json: any;
  bytes: Uint8Array;
}

const isRaw = (body: unknown): body is BodyInit =>
  typeof body === 'string' ||
  body instanceof Uint8Array ||
  body instanceof FormData ||
  body instanceof ReadableStream;

export async function call(
  db: Knex,
  user: User | null,
  method: Method,
  path: string,
  params: Record<string, string> = {},
  { query = {}, headers = {}, body }: CallOptions = {}
): Promise<Answer> {
  const entry = registry.find((e) => e.method === method && e.path === path);
  if (!entry) throw new Error(`no call ${method} ${path}`);
  const filled = path.replace(/\{(\w+)\}/g, (_, name: string) => encodeURIComponent(params[name] ?? ''));
  const url = new URL(`${ORIGIN}/api/v1${filled}?${new URLSearchParams(query)}`);
  const request = new Request(url, {
    method,
    headers: {
      ...(body !== undefined && !isRaw(body) && { 'content-type': 'application/json' }),
      ...headers
    },
    body: body === undefined ? undefined : isRaw(body) ? body : JSON.stringify(body),
    ...(body instanceof ReadableStream && { duplex: 'half' })
  } as RequestInit);
  const extra: Record<string, string> = {};
  const event = {
    request,
    url,
    params,
    locals: { db, user, session: null, path: url.pathname },
    getClientAddress: () => '127.0.0.1',
    setHeaders: (given: Record<string, string>) => void Object.assign(extra, given)
  } as unknown as RequestEvent;
  const response = await entry.handle(event as never);
  for (const [name, value] of Object.entries(extra)) response.headers.set(name, value);
  const bytes = new Uint8Array(await response.arrayBuffer());
  const isJson = response.headers.get('content-type')?.startsWith('application/json');
  const json = isJson && bytes.length ? JSON.parse(new TextDecoder().decode(bytes)) : null;
  return { status: response.status, headers: response.headers, json, bytes };
}
