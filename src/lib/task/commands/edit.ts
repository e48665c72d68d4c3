/** What every command gives back, and how a command refuses. */
import type { Brief, Card, Run, TaskDocument } from '../schema';

/** A changed document and the edit in words ('moved trial 14 to 62.25 s'), for history and the save's record. */
export interface Edit {
  document: TaskDocument;
  words: string;
}

/** A refused edit: the message names the value, what is expected and the way out. Nothing has changed. */
export class EditError extends Error {
  override name = 'EditError';
}

export function runOf(doc: TaskDocument, runId: string): Run {
  const run = doc.runs.find((r) => r.id === runId);
  if (!run) throw new EditError('This run is no longer part of the task. Choose another run.');
  return run;
}

export function cardOf(doc: TaskDocument, cardId: string): Card {
  const card = doc.cards.find((c) => c.id === cardId);
  if (!card) throw new EditError('This trial card is no longer part of the task. Choose another card.');
  return card;
}

export const withRun = (doc: TaskDocument, run: Run): TaskDocument => ({
  ...doc,
  runs: doc.runs.map((r) => (r.id === run.id ? run : r))
});

export const withCard = (doc: TaskDocument, card: Card): TaskDocument => ({
  ...doc,
  cards: doc.cards.map((c) => (c.id === card.id ? card : c))
});

export const withBrief = (doc: TaskDocument, change: Partial<Brief>): TaskDocument => ({
  ...doc,
  brief: { ...doc.brief, ...change }
});

/** `1 trial`, `3 trials`. */
export const count = (n: number, what: string): string => `${n} ${what}${n === 1 ? '' : 's'}`;
