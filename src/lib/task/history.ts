/** Undo and redo over whole documents; parts that did not change are shared, so steps cost little. */
import type { Edit } from './commands/edit';
import type { TaskDocument } from './schema';

export interface HistoryStep {
  /** The document before the edit. */
  before: TaskDocument;
  /** The document after the edit. */
  after: TaskDocument;
  words: string;
}
export interface History {
  present: TaskDocument;
  undone: readonly HistoryStep[];
  done: readonly HistoryStep[];
}

/** Oldest steps go when there are more than this. */
export const MAX_STEPS = 2000;

export const startHistory = (document: TaskDocument): History => ({
  present: document,
  done: [],
  undone: []
});

export const canUndo = (h: History): boolean => h.done.length > 0;
export const canRedo = (h: History): boolean => h.undone.length > 0;

/** Takes an edit; an edit that changes nothing leaves the history as it is. */
export function commit(h: History, edit: Edit): History {
  if (edit.document === h.present) return h;
  const step: HistoryStep = { before: h.present, after: edit.document, words: edit.words };
  return { present: edit.document, done: [...h.done, step].slice(-MAX_STEPS), undone: [] };
}

export function undo(h: History): History {
  const step = h.done.at(-1);
  if (!step) return h;
  return { present: step.before, done: h.done.slice(0, -1), undone: [...h.undone, step] };
}

export function redo(h: History): History {
  const step = h.undone.at(-1);
  if (!step) return h;
  return { present: step.after, done: [...h.done, step], undone: h.undone.slice(0, -1) };
}
