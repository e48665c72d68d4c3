import type { TaskDocument } from '$lib/task/schema';

const count = (n: number, one: string, many = `${one}s`) => `${n} ${n === 1 ? one : many}`;
const join = (parts: string[]) =>
  parts.length < 2 ? parts.join('') : `${parts.slice(0, -1).join(', ')} and ${parts.at(-1)}`;

/** Where a condition is used, in words, or null where it is not. */
export function conditionUse(document: TaskDocument, condition: string): string | null {
  const cards = document.cards.filter((c) => c.condition === condition);
  const ids = new Set(cards.map((c) => c.id));
  const trials = document.runs.reduce((n, run) => n + run.trials.filter((t) => ids.has(t.card)).length, 0);
  const contrasts = document.brief.contrasts.filter((c) => (c.weights[condition] ?? 0) !== 0);
  const parts: string[] = [];
  if (cards.length) parts.push(`${count(cards.length, 'card')} (${count(trials, 'trial')} on the runs)`);
  if (contrasts.length) parts.push(count(contrasts.length, 'contrast'));
  return parts.length ? join(parts) : null;
}

/** Where a named response is used: windows that allow it by name or hold it as correct. */
export function responseUse(document: TaskDocument, response: string): string | null {
  const cards = document.cards.filter((card) =>
    card.windows.some((w) => w.correct === response || w.allowed.includes(response))
  );
  return cards.length ? `response windows of ${count(cards.length, 'card')}` : null;
}

/** Where a card is used: its trials, run by run. */
export function cardUse(document: TaskDocument, card: string): string | null {
  const parts = document.runs
    .map((run) => ({ name: run.name, n: run.trials.filter((t) => t.card === card).length }))
    .filter((r) => r.n > 0)
    .map((r) => `${count(r.n, 'trial')} on ${r.name}`);
  return parts.length ? join(parts) : null;
}
