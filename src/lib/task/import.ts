/**
 * An event table becomes a run: one condition and one card for each `trial_type`, one trial for each row. The
 * report says what was made, what was not and why; a table that cannot be read changes nothing.
 */
import Papa from 'papaparse';
import { EditError, type Edit } from './commands/edit';
import { newCondition, newId, newItem } from './create';
import { itemDuration, modelledItems, trialLength } from './compile';
import {
  MAX_MICROS,
  MAX_TRIALS,
  type Card,
  type Condition,
  type Run,
  type TaskDocument,
  type Trial
} from './schema';
import { cut } from './text';
import { parseSeconds } from './time';

/** Larger files are refused before they are read. */
export const MAX_TABLE_BYTES = 10_000_000;

export interface ImportReport {
  trials: number;
  /** Conditions in order of appearance, with the number of trials and whether they are new. */
  conditions: { name: string; trials: number; made: boolean }[];
  /** Lines of the table (1 is the header) that gave no trial. */
  skipped: { line: number; reason: string }[];
  warnings: string[];
  /** Columns of the table that were not taken over. */
  unusedColumns: string[];
}
export type ImportResult =
  { ok: true; edit: Edit & { runId: string }; report: ImportReport } | { ok: false; message: string };

export type TableText = { ok: true; text: string } | { ok: false; message: string };

/** Bytes of a file → text; refuses what is no UTF-8 text, with the reason. */
export function decodeTable(bytes: Uint8Array): TableText {
  const no = (message: string): TableText => ({ ok: false, message });
  if (bytes.length === 0) return no('The file is empty. Choose an event table with a header line and rows.');
  if (bytes.length > MAX_TABLE_BYTES)
    return no(
      `The file has ${(bytes.length / 1e6).toFixed(1)} MB; an event table may have up to ${MAX_TABLE_BYTES / 1e6} MB. Is it the right file?`
    );
  if ((bytes[0] === 0xff && bytes[1] === 0xfe) || (bytes[0] === 0xfe && bytes[1] === 0xff))
    return no('The file is in UTF-16. Save it as tab-separated text in UTF-8 and try again.');
  if (bytes.includes(0)) return no('This is not a text file. Choose a tab-separated event table (.tsv).');
  try {
    return { ok: true, text: new TextDecoder('utf-8', { fatal: true }).decode(bytes) };
  } catch {
    return no('The file is not in UTF-8. Save it as tab-separated text in UTF-8 and try again.');
  }
}

export interface ImportOptions {
  /** Number of stored volumes of the new run; by default the task's, or as many as the table needs. */
  volumes?: number;
  /** Name of the new run. */
  name?: string;
}

interface Row {
  onset: number;
  duration: number;
  type: string;
}

export function importEventTable(doc: TaskDocument, text: string, options: ImportOptions = {}): ImportResult {
  const no = (message: string): ImportResult => ({ ok: false, message });
  if (!text.trim()) return no('The table is empty. It needs a header line and at least one row.');
  if (text.includes('\0')) return no('This is not a text table. Choose a tab-separated event table (.tsv).');
  // Event tables do not quote; a quotation mark is part of its cell, so one that no cell begins with is named here.
  const parsed = Papa.parse<string[]>(text.replace(/^\ufeff/, ''), {
    delimiter: '\t',
    quoteChar: '\u0001',
    skipEmptyLines: false
  });
  const lines = parsed.data;
  const header = (lines[0] ?? []).map((h) => h.trim());
  const at = (name: string) => header.indexOf(name);
  const onsetAt = at('onset');
  const durationAt = at('duration');
  if (onsetAt < 0 || durationAt < 0) {
    if (header.length === 1 && /[,;]/.test(header[0] ?? ''))
      return no(
        'The header is not separated by tabs. Save the table as tab-separated text (.tsv) and try again.'
      );
    const missing = [onsetAt < 0 ? '‘onset’' : '', durationAt < 0 ? '‘duration’' : '']
      .filter(Boolean)
      .join(' and ');
    return no(
      `The header has no column ${missing}. An event table has ‘onset’ and ‘duration’ in seconds; this one has: ${header.slice(0, 12).join(', ').slice(0, 200) || 'nothing'}.`
    );
  }
  const typeAt = at('trial_type');
  const skipped: ImportReport['skipped'] = [];
  const warnings: string[] = [];
  const rows: Row[] = [];
  let finer = 0;
  let unknownDurations = 0;
  lines.slice(1).forEach((cells, i) => {
    const line = i + 2;
    if (cells.every((c) => c.trim() === '')) return;
    const skip = (reason: string) => void skipped.push({ line, reason });
    if (cells.length !== header.length)
      return skip(`has ${cells.length} cells, the header has ${header.length}`);
    const onset = parseSeconds(cells[onsetAt]!);
    if (!onset) return skip(`onset ‘${clip(cells[onsetAt]!)}’ is not a number of seconds`);
    const durationText = cells[durationAt]!.trim();
    const duration = durationText === 'n/a' || durationText === '' ? null : parseSeconds(durationText);
    if (duration === null && durationText !== 'n/a' && durationText !== '')
      return skip(`duration ‘${clip(durationText)}’ is not a number of seconds`);
    if (duration && duration.micros < 0) return skip(`duration ‘${clip(durationText)}’ is negative`);
    if (Math.abs(onset.micros) > MAX_MICROS || (duration?.micros ?? 0) > MAX_MICROS)
      return skip('lies more than six hours from time zero');
    const type = typeAt < 0 ? 'trial' : cells[typeAt]!.trim();
    if (type === '' || type === 'n/a') return skip('has no trial_type');
    if (type.length > 300)
      return skip(`trial_type has ${type.length} characters; a condition name has at most 300`);
    if (!onset.exact || (duration && !duration.exact)) finer++;
    if (!duration) unknownDurations++;
    rows.push({ onset: onset.micros, duration: duration?.micros ?? 0, type });
  });
  if (rows.length === 0)
    return no(
      `No row of the table could be read${skipped[0] ? `; line ${skipped[0].line} ${skipped[0].reason}` : ''}.`
    );
  if (rows.length > MAX_TRIALS)
    return no(
      `The table has ${rows.length.toLocaleString('en')} events; a run holds at most ${MAX_TRIALS.toLocaleString('en')}. Split the table into several runs.`
    );
  if (typeAt < 0)
    warnings.push('The table has no column ‘trial_type’; every row became the condition ‘trial’.');
  if (finer) warnings.push(`${finer} times were finer than a microsecond and were rounded to it.`);
  if (unknownDurations)
    warnings.push(`${unknownDurations} durations were unknown and became 0 s (an impulse).`);
  try {
    return build(doc, rows, options, { skipped, warnings, header });
  } catch (error) {
    if (error instanceof EditError) return no(error.message);
    throw error;
  }
}

const clip = (text: string) => (text.length > 40 ? `${cut(text, 40)}…` : text);

function build(
  doc: TaskDocument,
  rows: Row[],
  options: ImportOptions,
  found: { skipped: ImportReport['skipped']; warnings: string[]; header: string[] }
): ImportResult {
  const types = [...new Set(rows.map((r) => r.type))];
  const conditions: Condition[] = [...doc.brief.conditions];
  const cards: Card[] = [...doc.cards];
  const report: ImportReport['conditions'] = [];
  const cardFor = new Map<string, Card>();
  for (const type of types) {
    const own = rows.filter((r) => r.type === type);
    const existing = conditions.find((c) => c.name === type);
    const condition = existing ?? newCondition(conditions, type);
    if (!existing) conditions.push(condition);
    const usual = mostCommon(own.map((r) => r.duration));
    const card =
      cards.find((c) => fits(c, condition.id, usual)) ?? eventCard(type, condition.id, usual, cards);
    if (!cards.includes(card)) cards.push(card);
    cardFor.set(type, card);
    report.push({ name: type, trials: own.length, made: !existing });
  }
  if (conditions.length > 100)
    throw new EditError(
      `The table would make ${conditions.length} conditions; a task holds at most 100. Is ‘trial_type’ the right column?`
    );
  const trials = rows.map((r): Trial => {
    const card = cardFor.get(r.type)!;
    const base: Trial = { id: newId(), card: card.id, onset: r.onset };
    return r.duration === card.duration ? base : { ...base, length: r.duration };
  });
  const end = Math.max(...rows.map((r) => r.onset + r.duration));
  const needed = Math.max(1, Math.ceil(end / doc.brief.tr));
  const volumes = options.volumes ?? Math.max(doc.brief.volumes, needed);
  if (volumes > 20_000)
    throw new EditError(
      `The table needs ${volumes.toLocaleString('en')} volumes; a run holds at most 20,000.`
    );
  if (options.volumes === undefined && needed > doc.brief.volumes)
    found.warnings.push(
      `The run was given ${needed} volumes, since the table ends after the task's usual ${doc.brief.volumes}.`
    );
  const run: Run = {
    id: newId(),
    name: cut(options.name?.trim() || `Run ${doc.runs.length + 1}`, 60),
    volumes,
    trials
  };
  const cardById = new Map(cards.map((c) => [c.id, c]));
  const late = trials.filter(
    (t) => t.onset + trialLength(t, cardById.get(t.card)!) > volumes * doc.brief.tr
  ).length;
  if (late) found.warnings.push(`${late} trials end after the run's ${volumes} volumes.`);
  return {
    ok: true,
    edit: {
      document: { ...doc, brief: { ...doc.brief, conditions }, cards, runs: [...doc.runs, run] },
      words: `imported ${trials.length} trials as ${run.name}`,
      runId: run.id
    },
    report: {
      trials: trials.length,
      conditions: report,
      skipped: found.skipped,
      warnings: found.warnings,
      unusedColumns: found.header.filter((h) => !['onset', 'duration', 'trial_type'].includes(h))
    }
  };
}

/** Longest of the most frequent values. */
function mostCommon(values: number[]): number {
  const seen = new Map<number, number>();
  for (const v of values) seen.set(v, (seen.get(v) ?? 0) + 1);
  return [...seen].sort((a, b) => b[1] - a[1] || b[0] - a[0])[0]![0];
}

/** A card of the condition whose one modelled item spans the trial, so that the event is the row's. */
function fits(card: Card, condition: string, duration: number): boolean {
  const items = modelledItems(card);
  const item = items[0];
  if (card.condition !== condition || items.length !== 1 || !item) return false;
  const trial = { id: '', card: card.id, onset: 0 };
  return card.duration === duration && item.onset === 0 && itemDuration(item, card, trial) === duration;
}

/** A card that shows a fixation for as long as the event lasts: what is shown instead is the experimenter's to add. */
function eventCard(type: string, condition: string, duration: number, cards: Card[]): Card {
  const base = cut(type, 110);
  const names = new Set(cards.map((c) => c.name));
  let name = base;
  for (let n = 2; names.has(name); n++) name = `${base} ${n}`;
  const item = { ...newItem('fixation', duration), name: 'event', modelled: true };
  return { id: newId(), name, condition, duration, items: [item], windows: [] };
}
