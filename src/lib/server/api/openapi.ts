/** OpenAPI 3.1 from the registry: the same schemas that parse the requests. */
import { z } from 'zod';
import { RIGHTS } from '../auth/member';
import { CODES } from '../errors';
import { TABLE, type AnyDefinition } from './endpoint';
import { BASE, type Entry } from './registry';

const schemaOf = (schema: z.ZodType, io: 'input' | 'output') => {
  const { $schema: _, ...json } = z.toJSONSchema(schema, { io, unrepresentable: 'any' });
  return json;
};
const content = (media: string, schema: object) => ({ content: { [media]: { schema } } });
const binary = { type: 'string', format: 'binary' };

function requestBody({ body }: AnyDefinition) {
  if (body === undefined) return undefined;
  if (body === TABLE) return { required: true, ...content(TABLE, { type: 'string' }) };
  if (body === 'multipart/form-data')
    return {
      required: true,
      ...content(body, { type: 'object', properties: { file: binary }, required: ['file'] })
    };
  return { required: true, ...content('application/json', schemaOf(body as z.ZodType, 'input')) };
}

function answer({ answer, versioned }: AnyDefinition) {
  const headers = versioned && {
    ETag: { schema: { type: 'string' }, description: 'The version, in quotes.' }
  };
  const described =
    answer === null
      ? {}
      : answer instanceof z.ZodType
        ? // Times are text outside: what the codec takes in.
          content('application/json', schemaOf(answer, 'input'))
        : content(answer.media, answer.media === 'application/json' ? {} : binary);
  return { description: 'Done', ...(headers && { headers }), ...described };
}

/** Refusals that a call can answer with, by what it declares. */
function refusals(d: AnyDefinition): number[] {
  const statuses = new Set<number>();
  if (d.right !== 'public') statuses.add(401);
  if (d.right !== 'public' && d.right !== 'signed-in') for (const s of [403, 404]) statuses.add(s);
  if (d.query || d.body) statuses.add(400);
  if (d.body) for (const s of [409, 413, 415, 422]) statuses.add(s);
  if (d.versioned === 'if-match') for (const s of [400, 412, 428]) statuses.add(s);
  return [...statuses].sort();
}

function parameters({ path, definition }: Entry) {
  const inPath = [...path.matchAll(/\{(\w+)\}/g)].map(([, name]) => ({
    name,
    in: 'path',
    required: true,
    schema: { type: 'string' }
  }));
  const query = definition.query ? schemaOf(definition.query as z.ZodType, 'input') : null;
  const required = new Set((query?.required as string[] | undefined) ?? []);
  const inQuery = Object.entries((query?.properties as Record<string, object> | undefined) ?? {}).map(
    ([name, schema]) => ({ name, in: 'query', required: required.has(name), schema })
  );
  const ifMatch = { name: 'If-Match', in: 'header', required: true, schema: { type: 'string' } };
  return [...inPath, ...inQuery, ...(definition.versioned === 'if-match' ? [ifMatch] : [])];
}

export function describeApi(entries: Entry[]) {
  const paths: Record<string, Record<string, unknown>> = {};
  for (const entry of entries) {
    const { method, path, definition: d } = entry;
    const roles = d.right in RIGHTS ? RIGHTS[d.right as keyof typeof RIGHTS] : d.right;
    (paths[path] ??= {})[method.toLowerCase()] = {
      summary: d.summary,
      'x-right': d.right,
      'x-roles': roles,
      security: d.right === 'public' ? [] : [{ session: [] }],
      parameters: parameters(entry),
      requestBody: requestBody(d),
      responses: {
        [d.status ?? (d.answer === null ? 204 : 200)]: answer(d),
        ...Object.fromEntries(
          refusals(d).map((s) => [
            s,
            { description: CODES[s as keyof typeof CODES], $ref: '#/components/responses/Error' }
          ])
        )
      }
    };
  }
  return {
    openapi: '3.1.0',
    info: { title: 'Ebbline', version: '1', description: 'Planning, rehearsing and packing scanner runs.' },
    servers: [{ url: BASE }],
    paths,
    components: {
      securitySchemes: { session: { type: 'apiKey', in: 'cookie', name: 'auth_session' } },
      responses: {
        Error: { description: 'Refused', ...content('application/json', schemaOf(errorShape, 'output')) }
      }
    }
  };
}

export const errorShape = z.object({
  error: z.object({
    code: z.string(),
    message: z.string(),
    details: z.array(z.object({ path: z.string(), message: z.string() })),
    current: z
      .object({ saveNumber: z.number().int(), author: z.string().nullable(), savedAt: z.string() })
      .optional()
  })
});
