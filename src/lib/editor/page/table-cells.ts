/** The table's columns, and what a typed text means for a trial. Pure. */
import { removeTrials, setGap, setOnset, setTrialCard, type Edit } from '$lib/task/commands';
import type { CompiledTrial } from '$lib/task/compile';
import type { TaskDocument } from '$lib/task/schema';
import { parseSeconds, secondsText } from '$lib/task/time';

export const COLUMNS = ['onset', 'gap', 'card', 'condition', 'length'] as const;
export type Column = (typeof COLUMNS)[number];
export const HEADINGS: Record<Column, string> = {
  onset: 'Onset, s',
  gap: 'Gap after, s',
  card: 'Card',
  condition: 'Condition',
  length: 'Length, s'
};
/** Columns that can be edited here; the others follow from the card. */
export const isEditable = (column: Column): boolean =>
  column === 'onset' || column === 'gap' || column === 'card';

export interface Row {
  trial: CompiledTrial;
  /** µs to the next trial, null for the last. */
  gap: number | null;
  condition: string;
}

export function rowsOf(document: TaskDocument, trials: readonly CompiledTrial[]): Row[] {
  const names = new Map(document.brief.conditions.map((c) => [c.id, c.name]));
  return trials.map((trial, i) => {
    const next = trials[i + 1];
    return {
      trial,
      gap: next ? next.onset - trial.end : null,
      condition: trial.card.condition ? (names.get(trial.card.condition) ?? '') : ''
    };
  });
}

export function cellText(row: Row, column: Column): string {
  switch (column) {
    case 'onset':
      return secondsText(row.trial.onset);
    case 'gap':
      return row.gap === null ? '' : secondsText(row.gap);
    case 'card':
      return row.trial.card.name;
    case 'condition':
      return row.condition;
    case 'length':
      return secondsText(row.trial.length);
  }
}

export type Typed = { ok: true; command: (doc: TaskDocument) => Edit } | { ok: false; message: string };

/** The command that a typed text asks for, or why there is none. `card` texts are card ids. */
export function readCell(runId: string, row: Row, column: Column, text: string): Typed {
  const id = row.trial.trial.id;
  if (column === 'card') return { ok: true, command: (doc) => setTrialCard(doc, runId, [id], text) };
  const time = parseSeconds(text.replace('−', '-').replace(',', '.'));
  if (!time)
    return {
      ok: false,
      message: `‘${text}’ is no time. Give seconds as a plain number, such as 62.25.`
    };
  if (!time.exact)
    return {
      ok: false,
      message: `‘${text}’ is finer than a microsecond. Give at most six decimals.`
    };
  return column === 'gap'
    ? { ok: true, command: (doc) => setGap(doc, runId, id, time.micros) }
    : { ok: true, command: (doc) => setOnset(doc, runId, id, time.micros) };
}

export const removeRow =
  (runId: string, row: Row) =>
  (doc: TaskDocument): Edit =>
    removeTrials(doc, runId, [row.trial.trial.id]);
