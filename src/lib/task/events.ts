/**
 * The only writer of BIDS event tables. Pack writes the planned table with it, the player and the returns the
 * performed one. Tab-separated; onset and duration in seconds from the first stored volume (BIDS 1.10, events).
 */
import { cardsById, compileRun, itemDuration, modelledItems } from './compile';
import type { Card, Item, Run, TaskDocument, Trial } from './schema';
import { toSeconds } from './time';

export const EVENT_COLUMNS = [
  'onset',
  'duration',
  'trial_type',
  'response_time',
  'stim_file',
  'item',
  'trial',
  'response',
  'correct',
  'planned_onset'
] as const;

export interface EventRow {
  /** Seconds from time zero; null where the item was never shown. */
  onset: number | null;
  /** Seconds. */
  duration: number | null;
  trial_type: string | null;
  /** Seconds from this row's onset; negative if early, null if missed. */
  response_time: number | null;
  stim_file: string | null;
  item: string;
  /** Number of the trial in the run, from 1. */
  trial: number;
  response: string | null;
  correct: 'correct' | 'wrong' | 'missing' | null;
  /** Seconds. */
  planned_onset: number;
}

/** What happened to one item of one trial. Seconds from time zero; onset null: not shown. */
export interface PerformedItem {
  trialId: string;
  itemId: string;
  onset: number | null;
  duration: number | null;
}
/** What was answered in one window of one trial. `time` in seconds from time zero; response null: missed. */
export interface PerformedResponse {
  trialId: string;
  windowId: string;
  response: string | null;
  time: number | null;
  correct: 'correct' | 'wrong' | 'missing' | null;
}
/** Path under `stimuli/` by SHA-256 of the asset, for files that are exported. */
export type StimFiles = Record<string, string>;

interface Draft {
  row: EventRow;
  itemOnset: number;
  modelled: boolean;
  taken: boolean;
}

/** Rows as planned: every item at its planned time, nothing answered. */
export function plannedEvents(doc: TaskDocument, run: Run, stimFiles: StimFiles = {}): EventRow[] {
  const items = run.trials.flatMap((trial) => {
    const card = doc.cards.find((c) => c.id === trial.card);
    return (card?.items ?? []).map((item): PerformedItem => ({
      trialId: trial.id,
      itemId: item.id,
      onset: toSeconds(trial.onset + item.onset),
      duration: toSeconds(itemDuration(item, card!, trial))
    }));
  });
  return performedEvents(doc, run, items, [], stimFiles);
}

/**
 * Rows as performed. One row an item; a modelled item's row carries `trial_type`. A window's answer stands on the
 * row of the latest modelled item that begins at or before the window, else on the trial's first row; a second
 * window on the same row gets a row of its own. Items that are not in `items` were not shown: onset n/a, which
 * BIDS does not allow in a table, so they are left out here and stand in the log.
 */
export function performedEvents(
  doc: TaskDocument,
  run: Run,
  items: readonly PerformedItem[],
  responses: readonly PerformedResponse[],
  stimFiles: StimFiles = {}
): EventRow[] {
  const shown = new Map(items.map((i) => [`${i.trialId} ${i.itemId}`, i]));
  const answered = new Map(responses.map((r) => [`${r.trialId} ${r.windowId}`, r]));
  const names = new Map(doc.brief.responses.map((r) => [r.id, r.name]));
  const rows = compileRun(doc, run).trials.flatMap(({ trial, card, index }) => {
    const drafts = card.items.flatMap((item): Draft[] => {
      const done = shown.get(`${trial.id} ${item.id}`);
      if (!done || done.onset === null) return [];
      const row: EventRow = {
        onset: done.onset,
        duration: done.duration,
        trial_type: trialTypeOf(doc, card, item),
        response_time: null,
        stim_file: stimFileOf(item, stimFiles),
        item: item.name,
        trial: index,
        response: null,
        correct: null,
        planned_onset: toSeconds(trial.onset + item.onset)
      };
      return [{ row, itemOnset: item.onset, modelled: row.trial_type !== null, taken: false }];
    });
    drafts.sort((a, b) => a.itemOnset - b.itemOnset);
    const extra = card.windows.flatMap((w) => {
      const answer = answered.get(`${trial.id} ${w.id}`);
      if (!answer) return [];
      const fitting = drafts.filter((d) => d.modelled && d.itemOnset <= w.onset).at(-1) ?? drafts[0];
      const target =
        fitting && !fitting.taken ? fitting.row : windowRow(trial, w.name, w.onset, w.duration, index);
      if (fitting) fitting.taken = true;
      target.response = answer.response === null ? null : (names.get(answer.response) ?? answer.response);
      target.correct = answer.correct;
      target.response_time =
        answer.time === null || target.onset === null ? null : answer.time - target.onset;
      return target === fitting?.row ? [] : [target];
    });
    return [...drafts.map((d) => d.row), ...extra];
  });
  return rows.sort((a, b) => (a.onset ?? Infinity) - (b.onset ?? Infinity) || a.trial - b.trial);
}

function trialTypeOf(doc: TaskDocument, card: Card, item: Item): string | null {
  if (!item.modelled || card.condition === null) return null;
  const condition = doc.brief.conditions.find((c) => c.id === card.condition)?.name ?? '';
  return modelledItems(card).length > 1 ? `${condition}/${item.name}` : condition;
}

function stimFileOf(item: Item, files: StimFiles): string | null {
  if (item.kind !== 'picture' || item.asset === null) return null;
  return Object.hasOwn(files, item.asset) ? files[item.asset]! : null;
}

const windowRow = (trial: Trial, name: string, onset: number, duration: number, index: number): EventRow => ({
  onset: toSeconds(trial.onset + onset),
  duration: toSeconds(duration),
  trial_type: null,
  response_time: null,
  stim_file: null,
  item: name,
  trial: index,
  response: null,
  correct: null,
  planned_onset: toSeconds(trial.onset + onset)
});

/** Seconds with at least three decimals, at most six (a microsecond), never in exponent form. */
export function secondsCell(value: number | null): string {
  if (value === null) return 'n/a';
  const text = value.toFixed(6).replace(/0{1,3}$/, '');
  return /^-0\.0+$/.test(text) ? text.slice(1) : text;
}

/** A cell of a tab-separated table: white space that would break the table becomes a space, empty is n/a. */
export const textCell = (value: string | null): string =>
  (value ?? '').replace(/[\p{Cc}\u2028\u2029]+/gu, ' ').trim() || 'n/a';

/** The event table as text, ending in a line feed. */
export function eventsTsv(rows: readonly EventRow[]): string {
  const lines = rows.map((r) =>
    [
      secondsCell(r.onset),
      secondsCell(r.duration),
      textCell(r.trial_type),
      secondsCell(r.response_time),
      textCell(r.stim_file),
      textCell(r.item),
      String(r.trial),
      textCell(r.response),
      textCell(r.correct),
      secondsCell(r.planned_onset)
    ].join('\t')
  );
  return [EVENT_COLUMNS.join('\t'), ...lines].join('\n') + '\n';
}

/** For each condition a table of its modelled events: `onset duration amplitude`, seconds. */
export function conditionTsvs(doc: TaskDocument, run: Run): { trialType: string; text: string }[] {
  const { events } = compileRun(doc, run);
  const types = [...new Set(events.map((e) => e.trialType))];
  return types.map((trialType) => ({
    trialType,
    text:
      ['onset\tduration\tamplitude']
        .concat(
          events
            .filter((e) => e.trialType === trialType)
            .map((e) => `${secondsCell(toSeconds(e.onset))}\t${secondsCell(toSeconds(e.duration))}\t1`)
        )
        .join('\n') + '\n'
  }));
}

/** Files that the run's pictures name, by hash: for checking that a bundle is whole. */
export function assetsOf(doc: TaskDocument): { sha256: string; file: string; card: string; item: string }[] {
  const cards = [...cardsById(doc).values()];
  return cards.flatMap((card) =>
    card.items.flatMap((item) =>
      item.kind === 'picture' && item.asset !== null
        ? [{ sha256: item.asset, file: item.file, card: card.name, item: item.name }]
        : []
    )
  );
}
