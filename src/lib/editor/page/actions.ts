/** What can be done to trials on the Page, each defined once for keyboard, menu, buttons and help. */
import {
  duplicateTrials,
  moveTrialAfter,
  moveTrials,
  placeTrial,
  removeTrials,
  setGap
} from '$lib/task/commands';
import { toSeconds } from '$lib/task/time';
import type { TaskEditor } from '../task-editor.svelte';
import { nudge, snap } from './grid';
import { endOnset } from './placing';

export interface PageAction {
  id: string;
  label: string;
  /** As the help shows it. */
  keys: string;
  matches(e: KeyboardEvent): boolean;
  applies(editor: TaskEditor): boolean;
  run(editor: TaskEditor): void;
}

const hasSelection = (editor: TaskEditor): boolean => editor.canEdit && editor.selection.size > 0;
const mod = (e: KeyboardEvent): boolean => e.ctrlKey || e.metaKey;
const plain = (e: KeyboardEvent): boolean => !mod(e) && !e.altKey;

/** `1 trial`, or the trial's number and card where there is only one. */
export function selectionText(editor: TaskEditor): string {
  const chosen = editor.settled.trials.filter((t) => editor.selection.has(t.trial.id));
  const only = chosen.length === 1 ? chosen[0] : undefined;
  return only ? `Trial ${only.index}, ${only.card.name}` : `${chosen.length} trials`;
}

export function nudgeSelection(editor: TaskEditor, steps: number): void {
  const chosen = editor.settled.trials.filter((t) => editor.selection.has(t.trial.id));
  const first = chosen[0];
  if (!first) return;
  const to = nudge(first.onset, steps, editor.view.grid, editor.document.brief.tr);
  const ids = chosen.map((t) => t.trial.id);
  if (editor.apply((doc) => moveTrials(doc, editor.runId, ids, to - first.onset)))
    editor.announce(`${selectionText(editor)} now at ${toSeconds(to)} s.`);
}

/** Moves the selection one place earlier or later in the order. */
export function reorderSelection(editor: TaskEditor, way: -1 | 1): void {
  const { trials } = editor.settled;
  const isChosen = (i: number): boolean => editor.selection.has(trials[i]?.trial.id ?? '');
  const places = trials.map((_, i) => i).filter(isChosen);
  const first = places[0];
  const last = places.at(-1);
  if (first === undefined || last === undefined) return;
  const rest = trials.filter((_, i) => !isChosen(i));
  const passed = way < 0 ? trials[first - 1] : trials[last + 1];
  if (!passed) {
    editor.announce(way < 0 ? 'Already the first.' : 'Already the last.');
    return;
  }
  const after = way > 0 ? passed.trial.id : (rest[rest.indexOf(passed) - 1]?.trial.id ?? null);
  const ids = places.map((i) => trials[i]!.trial.id);
  if (editor.apply((doc) => moveTrialAfter(doc, editor.runId, ids, after)))
    editor.announce(
      `Moved ${way < 0 ? 'before' : 'behind'} ${passed.card.name}: now ${selectionText(editor)} of ${trials.length}.`
    );
}

export function placeAtEnd(editor: TaskEditor, cardId: string): void {
  const { grid } = editor.view;
  const onset = endOnset(editor.settled.trials, grid, editor.document.brief.tr);
  const made = editor.apply((doc) => placeTrial(doc, editor.runId, cardId, onset));
  if (!made) return;
  editor.select([made.trialId]);
  const card = editor.document.cards.find((c) => c.id === cardId);
  editor.announce(`Placed ${card?.name ?? 'a trial'} at ${toSeconds(onset)} s.`);
}

/** Makes the gap after a trial one grid step longer or shorter, never below 0. */
export function nudgeGap(editor: TaskEditor, trialId: string, steps: number): void {
  const { trials } = editor.settled;
  const at = trials.findIndex((t) => t.trial.id === trialId);
  const here = trials[at];
  const next = trials[at + 1];
  if (!here || !next) return;
  const { tr } = editor.document.brief;
  // The next trial's onset goes to the grid, not the gap's length: onsets are what is sampled.
  const onset = Math.max(here.end, nudge(next.onset, steps, editor.view.grid, tr));
  const gap = onset - here.end;
  if (editor.apply((doc) => setGap(doc, editor.runId, trialId, gap)))
    editor.announce(`Gap after trial ${here.index}: ${toSeconds(gap)} s.`);
}

/** The gap after a trial when the next one's onset is dragged to `onset`: snapped, never below 0. */
export function draggedGap(editor: TaskEditor, trialId: string, onset: number): number | null {
  const { trials } = editor.settled;
  const here = trials.find((t) => t.trial.id === trialId);
  if (!here) return null;
  const snapped = snap(onset, editor.view.grid, editor.document.brief.tr);
  return Math.max(0, Math.max(here.end, snapped) - here.end);
}

export const PAGE_ACTIONS: readonly PageAction[] = [
  {
    id: 'earlier',
    label: 'Nudge earlier by one grid step',
    keys: 'Alt+←',
    matches: (e) => e.altKey && !e.shiftKey && e.key === 'ArrowLeft',
    applies: hasSelection,
    run: (editor) => nudgeSelection(editor, -1)
  },
  {
    id: 'later',
    label: 'Nudge later by one grid step',
    keys: 'Alt+→',
    matches: (e) => e.altKey && !e.shiftKey && e.key === 'ArrowRight',
    applies: hasSelection,
    run: (editor) => nudgeSelection(editor, 1)
  },
  {
    id: 'forward',
    label: 'Move before the trial in front',
    keys: 'Alt+Shift+←',
    matches: (e) => e.altKey && e.shiftKey && e.key === 'ArrowLeft',
    applies: hasSelection,
    run: (editor) => reorderSelection(editor, -1)
  },
  {
    id: 'back',
    label: 'Move behind the next trial',
    keys: 'Alt+Shift+→',
    matches: (e) => e.altKey && e.shiftKey && e.key === 'ArrowRight',
    applies: hasSelection,
    run: (editor) => reorderSelection(editor, 1)
  },
  {
    id: 'remove',
    label: 'Remove',
    keys: 'Delete',
    matches: (e) => plain(e) && (e.key === 'Delete' || e.key === 'Backspace'),
    applies: hasSelection,
    run: (editor) => {
      const words = selectionText(editor);
      const ids = [...editor.selection];
      if (editor.apply((doc) => removeTrials(doc, editor.runId, ids))) editor.announce(`${words} removed.`);
    }
  },
  {
    id: 'duplicate',
    label: 'Duplicate right after',
    keys: 'Ctrl+D',
    matches: (e) => mod(e) && !e.altKey && e.key.toLowerCase() === 'd',
    applies: hasSelection,
    run: (editor) => {
      const made = editor.apply((doc) => duplicateTrials(doc, editor.runId, [...editor.selection]));
      if (!made) return;
      editor.select(made.trialIds);
      editor.announce(`${selectionText(editor)} made by duplication.`);
    }
  },
  {
    id: 'all',
    label: 'Select all trials',
    keys: 'Ctrl+A',
    matches: (e) => mod(e) && !e.altKey && e.key.toLowerCase() === 'a',
    applies: () => true,
    run: (editor) => {
      editor.select(editor.settled.trials.map((t) => t.trial.id));
      editor.announce(`${editor.selection.size} trials selected.`);
    }
  }
];
