/**
 * One vocabulary of refusals. Services throw them; pages show them as they are, the API's wrapper prints them as
 * `{ error: { code, message, details } }`. A message names the value, what was expected and the way out.
 */
import { error, isHttpError, type HttpError } from '@sveltejs/kit';
import type { z } from 'zod';

export const CODES = {
  400: 'malformed',
  401: 'not_signed_in',
  403: 'not_allowed',
  404: 'not_found',
  409: 'conflict',
  412: 'stale',
  413: 'too_large',
  415: 'wrong_type',
  422: 'breaks_a_rule',
  428: 'if_match_missing',
  429: 'too_many'
} as const;
export type RefusalStatus = keyof typeof CODES;

export interface Detail {
  path: string;
  message: string;
}

export function refuse(status: RefusalStatus, message: string, more: Partial<App.Error> = {}): never {
  error(status, { code: CODES[status], message, ...more });
}

/** NUL and halves of surrogate pairs: JSON can hold them, but they are no text and the database refuses them. */
const NO_TEXT = /\0|\p{Surrogate}/u;

/** Dotted path of the first text that holds such a character, or null. */
function brokenText(value: unknown, path = ''): string | null {
  if (typeof value === 'string') return NO_TEXT.test(value) ? path : null;
  if (typeof value !== 'object' || value === null) return null;
  for (const [key, inner] of Object.entries(value)) {
    const at = path ? `${path}.${key}` : key;
    const found = NO_TEXT.test(key) ? path || 'a name' : brokenText(inner, at);
    if (found !== null) return found;
  }
  return null;
}

export function refuseBrokenText(value: unknown): void {
  const path = brokenText(value);
  if (path === null) return;
  const message = 'holds a character that is no text (NUL, or half of a surrogate pair); take it out';
  refuse(422, `${path ? `The field ‘${path}’` : 'The text'} ${message}.`, { details: [{ path, message }] });
}

/** What came from outside, parsed; 422 with every field that breaks a rule. */
export function accept<T>(schema: z.ZodType<T>, value: unknown): T {
  refuseBrokenText(value);
  const parsed = schema.safeParse(value);
  if (parsed.success) return parsed.data;
  const details = parsed.error.issues.map((i) => ({
    path: i.path.map(String).join('.'),
    message: i.message
  }));
  const first = details[0]!;
  return refuse(422, `Expected ${first.message}${first.path ? ` in the field ‘${first.path}’` : ''}.`, {
    details
  });
}

/** The same words for what is not there and for what belongs to somebody else. */
export const notFound = (what = 'page'): never =>
  refuse(
    404,
    `There is no such ${what}, or it is not yours to see. Check the address, or go back to your labs.`
  );

const size = (bytes: number) =>
  bytes >= 1e6 ? `${(bytes / 1e6).toFixed(1)} MB` : `${Math.ceil(bytes / 1e3)} kB`;

/** 413 for what is more than `cap` bytes. */
export function refuseLarge(cap: number, what: string, sent?: number): never {
  refuse(
    413,
    `${what} ${sent ? `of ${size(sent)} is` : 'is'} larger than the ${size(cap)} allowed here. Send less, or ask whoever runs Ebbline to raise the limit.`
  );
}

/** A refusal that a form may show beside its fields; anything else is thrown on. */
export function refusalOf(thrown: unknown): HttpError {
  if (isHttpError(thrown) && thrown.status < 500) return thrown;
  throw thrown;
}

/** PostgreSQL's unique_violation on the named constraint or index. */
export const isTaken = (thrown: unknown, constraint: string): boolean =>
  thrown instanceof Error &&
  (thrown as { code?: string }).code === '23505' &&
  (thrown as { constraint?: string }).constraint === constraint;
