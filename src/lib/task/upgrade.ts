/**
 * Reading a document from outside (API, store, file): upgrade to the present format, check its shape, then check
 * what the shape cannot say (references and uniqueness). Stored bytes are never rewritten by reading.
 */
import type { z } from 'zod';
import { documentSchema, FORMAT, type TaskDocument } from './schema';

export interface Problem {
  /** Dotted path within the document, such as `runs.0.trials.12.onset`. */
  path: string;
  message: string;
}
export type Reading = { ok: true; document: TaskDocument } | { ok: false; problems: Problem[] };

/** Pure upgrades from format n to n + 1, in order; none yet. */
const upgrades: ((document: Record<string, unknown>) => Record<string, unknown>)[] = [];

export function readDocument(value: unknown): Reading {
  if (typeof value !== 'object' || value === null || Array.isArray(value))
    return { ok: false, problems: [{ path: '', message: 'A task document is an object.' }] };
  let raw = value as Record<string, unknown>;
  const format = raw.format;
  if (typeof format !== 'number' || !Number.isInteger(format) || format < 1)
    return {
      ok: false,
      problems: [{ path: 'format', message: `expected a whole number from 1 to ${FORMAT}` }]
    };
  if (format > FORMAT)
    return {
      ok: false,
      problems: [
        {
          path: 'format',
          message: `is ${format}, but this Ebbline reads up to ${FORMAT}: open it with a newer Ebbline`
        }
      ]
    };
  for (let n = format; n < FORMAT; n++) raw = upgrades[n - 1]!(raw);
  const parsed = documentSchema.safeParse(raw);
  if (!parsed.success) return { ok: false, problems: problemsOf(parsed.error) };
  const problems = referenceProblems(parsed.data);
  return problems.length ? { ok: false, problems } : { ok: true, document: parsed.data };
}

export const problemsOf = (error: z.ZodError): Problem[] =>
  error.issues.map((i) => ({ path: i.path.map(String).join('.'), message: i.message }));

function referenceProblems(d: TaskDocument): Problem[] {
  const problems: Problem[] = [];
  const unique = (path: string, values: string[], what: string) => {
    const seen = new Set<string>();
    values.forEach((v, i) => {
      if (seen.has(v)) problems.push({ path: `${path}.${i}`, message: `${what} ‘${v}’ stands twice` });
      seen.add(v);
    });
    return seen;
  };
  const { brief } = d;
  const conditions = unique(
    'brief.conditions',
    brief.conditions.map((c) => c.id),
    'condition id'
  );
  unique(
    'brief.conditions',
    brief.conditions.map((c) => c.name),
    'condition name'
  );
  unique(
    'brief.contrasts',
    brief.contrasts.map((c) => c.id),
    'contrast id'
  );
  const responses = unique(
    'brief.responses',
    brief.responses.map((r) => r.id),
    'response id'
  );
  const cards = unique(
    'cards',
    d.cards.map((c) => c.id),
    'card id'
  );
  unique(
    'runs',
    d.runs.map((r) => r.id),
    'run id'
  );
  unique(
    'lists',
    d.lists.map((l) => l.id),
    'list id'
  );

  brief.contrasts.forEach((c, i) => {
    for (const key of Object.keys(c.weights))
      if (!conditions.has(key))
        problems.push({
          path: `brief.contrasts.${i}.weights.${key}`,
          message: `contrast ‘${c.name}’ weighs a condition that the brief does not have`
        });
  });
  d.cards.forEach((card, i) => {
    if (card.condition !== null && !conditions.has(card.condition))
      problems.push({
        path: `cards.${i}.condition`,
        message: `card ‘${card.name}’ names a condition that the brief does not have`
      });
    unique(
      `cards.${i}.items`,
      card.items.map((x) => x.id),
      'item id'
    );
    unique(
      `cards.${i}.windows`,
      card.windows.map((x) => x.id),
      'window id'
    );
    card.windows.forEach((w, j) => {
      for (const r of w.correct === null ? w.allowed : [...w.allowed, w.correct])
        if (!responses.has(r))
          problems.push({
            path: `cards.${i}.windows.${j}`,
            message: `window ‘${w.name}’ names a response that the brief does not have`
          });
    });
  });
  d.runs.forEach((run, i) => {
    unique(
      `runs.${i}.trials`,
      run.trials.map((t) => t.id),
      'trial id'
    );
    run.trials.forEach((t, j) => {
      if (!cards.has(t.card))
        problems.push({
          path: `runs.${i}.trials.${j}.card`,
          message: 'a trial names a card that the task does not have'
        });
    });
  });
  return problems;
}
