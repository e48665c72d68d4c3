/**
 * The one wrapper of every API call: who is asking, may they, is what they sent well formed, then the handler, then
 * the answer or the error in the API's shape. What is declared here also makes the OpenAPI description.
 */
import { isHttpError, isRedirect, type RequestEvent, type RequestHandler } from '@sveltejs/kit';
import { z } from 'zod';
import { labOf, memberOf, OWNED_KINDS, type Membership, type Right } from '../auth/member';
import type { SessionUser } from '../auth/lucia';
import { config } from '../config';
import { accept, notFound, refuse, refuseLarge } from '../errors';
import { readBytes, readJson, needMedia } from './body';

/** What a file answers with, for the description. */
export interface FileAnswer {
  media: string;
}
export const file = (media: string): FileAnswer => ({ media });

/** A time in the API: text outside, a Date inside. */
export const moment = z.codec(z.iso.datetime(), z.date(), {
  decode: (text) => new Date(text),
  encode: (date) => date.toISOString()
});

export const TABLE = 'text/tab-separated-values';

export interface Definition<P, Q, B, A> {
  summary: string;
  /** A right in the lab that the path names, or: somebody signed in, or: anybody. */
  right: Right | 'signed-in' | 'public';
  /** Parts of the path. `lab`, `study`, `task`, `profile` and `revision` say which lab is meant. */
  params?: z.ZodType<P>;
  query?: z.ZodType<Q>;
  /** JSON body; or the media type of a body that the handler gets as bytes (a table) or reads itself (multipart). */
  body?: z.ZodType<B> | typeof TABLE | 'multipart/form-data';
  answer: z.ZodType<A> | FileAnswer | null;
  status?: 200 | 201 | 204;
  /** Answers carry an ETag; changing needs it back in If-Match. */
  versioned?: 'etag' | 'if-match';
  handler: (call: Call<P, Q, B>) => Promise<A | Response | void>;
}
// eslint-disable-next-line @typescript-eslint/no-explicit-any -- a registry holds definitions of every kind
export type AnyDefinition = Definition<any, any, any, any>;

export class Call<P, Q, B> {
  constructor(
    readonly event: RequestEvent,
    readonly params: P,
    readonly query: Q,
    readonly body: B,
    /** The body of a call that takes a table. */
    readonly bytes: Uint8Array,
    private readonly caller: SessionUser | null,
    private readonly membership: Membership | null
  ) {}
  get db() {
    return this.event.locals.db;
  }
  get user(): SessionUser {
    return this.caller ?? refuse(401, 'Sign in first.');
  }
  /** The caller's membership in the lab that the path names. */
  get member(): Membership {
    return this.membership ?? notFound('lab');
  }
  get lab(): string {
    return this.member.lab.id;
  }
  /** The version in If-Match, as a whole number. */
  get base(): number {
    const given = this.event.request.headers.get('if-match');
    if (given === null)
      refuse(
        428,
        'Say which version you changed: send the ETag you were given back in If-Match, as in If-Match: "12".'
      );
    const match = /^(?:W\/)?"(\d{1,9})"$/.exec(given.trim());
    return match
      ? Number(match[1])
      : refuse(400, `If-Match is ‘${given}’; expected a version in quotes, as in "12".`);
  }
}

export type Endpoint = RequestHandler & { definition: AnyDefinition };

export function endpoint<P = Record<string, never>, Q = unknown, B = undefined, A = void>(
  definition: Definition<P, Q, B, A>
): Endpoint {
  const handle: RequestHandler = async (event) => {
    try {
      const { user } = event.locals;
      if (definition.right !== 'public' && !user)
        refuse(
          401,
          'Nobody is signed in, or the session has ended. Sign in again; what you have not saved stays in the browser.'
        );
      const params = definition.params ? pathParams(definition.params, event.params) : (event.params as P);
      const membership = await membershipFor(definition.right, event, user);
      const query = readQuery(definition.query, event.url);
      const bytes = await readTable(definition, event.request);
      const body = await readBody(definition.body, event.request);
      const call = new Call(event, params, query, body, bytes, user, membership);
      const result = await definition.handler(call);
      if (result instanceof Response) return result;
      if (definition.answer === null) return new Response(null, { status: definition.status ?? 204 });
      if (!(definition.answer instanceof z.ZodType))
        throw new Error('A file endpoint answers with a Response.');
      return Response.json(z.encode(definition.answer, result as A), {
        status: definition.status ?? 200,
        headers: { 'cache-control': 'no-store' }
      });
    } catch (thrown) {
      return errorResponse(thrown, event);
    }
  };
  return Object.assign(handle, { definition });
}

function pathParams<P>(schema: z.ZodType<P>, given: unknown): P {
  const parsed = schema.safeParse(given);
  return parsed.success ? parsed.data : notFound('address');
}

async function membershipFor(right: AnyDefinition['right'], event: RequestEvent, user: SessionUser | null) {
  if (right === 'public' || right === 'signed-in' || !user) return null;
  const params = event.params as Record<string, string | undefined>;
  const { db } = event.locals;
  const kind = OWNED_KINDS.find((k) => params[k] !== undefined);
  const lab = params.lab ?? (kind ? await labOf(db, user.id, kind, params[kind]!) : notFound('lab'));
  return memberOf(db, user.id, lab, right);
}

function readQuery<Q>(schema: z.ZodType<Q> | undefined, url: URL): Q {
  if (!schema) return undefined as Q;
  const parsed = schema.safeParse(Object.fromEntries(url.searchParams));
  if (parsed.success) return parsed.data;
  const details = parsed.error.issues.map((i) => ({
    path: i.path.map(String).join('.'),
    message: i.message
  }));
  return refuse(400, `The address has ?${details[0]!.path}= wrong: ${details[0]!.message}.`, { details });
}

const NOTHING = new Uint8Array();

async function readTable({ body }: AnyDefinition, request: Request): Promise<Uint8Array> {
  if (body !== TABLE) return NOTHING;
  needMedia(request, [TABLE, 'text/plain']);
  return readBytes(request, config().documentLimit);
}

async function readBody<B>(body: Definition<never, never, B, never>['body'], request: Request): Promise<B> {
  if (body instanceof z.ZodType) return accept(body, await readJson(request, config().documentLimit));
  // Read by the handler as it arrives.
  if (body === 'multipart/form-data') needMedia(request, [body]);
  return undefined as B;
}

function tooLarge(): unknown {
  try {
    return refuseLarge(config().uploadLimit, 'What was sent');
  } catch (refusal) {
    return refusal;
  }
}

function errorResponse(thrown: unknown, event: RequestEvent): Response {
  if (isRedirect(thrown)) throw thrown;
  // The framework's own limit on a body (BODY_SIZE_LIMIT) throws an error of its own.
  if (!isHttpError(thrown) && (thrown as { status?: unknown } | null)?.status === 413)
    return errorResponse(tooLarge(), event);
  if (!isHttpError(thrown)) {
    console.error(`${event.request.method} ${event.url.pathname} failed`, thrown);
    const message =
      'Something went wrong on the server, and it was written to its log. Nothing was changed; try again.';
    return Response.json({ error: { code: 'server_error', message, details: [] } }, { status: 500 });
  }
  const { code = 'refused', message, details = [], retryAfter, current } = thrown.body;
  return Response.json(
    { error: { code, message, details, ...(current && { current }) } },
    {
      status: thrown.status,
      headers: {
        'cache-control': 'no-store',
        ...(retryAfter !== undefined && { 'retry-after': String(retryAfter) }),
        ...(current && { etag: `"${current.saveNumber}"` })
      }
    }
  );
}
