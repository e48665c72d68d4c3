/**
 * Keeps a run's lines and writes them out. Lines are kept with page time only; `time` from zero is worked out on
 * writing, so pulses and keys before zero come out negative, and a log put together again after a crash takes the
 * same way as one that ended well.
 */
import { sha256Hex } from '$lib/task/canonical';
import { roundMicro } from './clock';
import type { EndState, LogEnd, LogEntry, LogHeader, NewEntry } from './log-lines';

/** Lines that must be on disk at once; the rest may wait up to 500 ms. */
export const isUrgent = (entry: LogEntry): boolean => entry.type !== 'item' && entry.type !== 'drop';

export class RunLog {
  readonly header: LogHeader;
  readonly entries: LogEntry[] = [];
  readonly #sink: (entry: LogEntry) => void;

  /** `sink` gets every entry as it is made, to keep it safe. */
  constructor(header: LogHeader, sink: (entry: LogEntry) => void = () => {}) {
    this.header = header;
    this.#sink = sink;
  }

  add(entry: NewEntry): void {
    const numbered = { seq: this.entries.length, ...entry, page: roundMicro(entry.page) } as LogEntry;
    this.entries.push(numbered);
    this.#sink(numbered);
  }
}

/** Page time of zero: the last one noted that no false start has undone. */
export function zeroOf(entries: readonly LogEntry[]): number | null {
  let zero: number | null = null;
  for (const e of entries)
    if (e.type === 'note' && e.what === 'zero') zero = e.page;
    else if (e.type === 'note' && (e.what === 'false-start' || e.what === 'disarmed')) zero = null;
  return zero;
}

/** The entries that stand: items and answers of a false start do not, its keys and pulses do. Sorted by time. */
export function standing(entries: readonly LogEntry[]): LogEntry[] {
  const undone = entries.findLast(
    (e) => e.type === 'note' && (e.what === 'false-start' || e.what === 'disarmed')
  );
  const from = undone?.seq ?? -1;
  return entries
    .filter((e) => e.seq > from || !(e.type === 'item' || e.type === 'response' || isZero(e)))
    .map((e): LogEntry =>
      // A pulse of a false start keeps its time and loses its number.
      e.seq < from && e.type === 'pulse' && e.state !== 'ignored'
        ? { ...e, state: 'ignored', volume: null, part: null, reason: 'false-start' }
        : e
    )
    .sort((a, b) => a.page - b.page || a.seq - b.seq);
}
const isZero = (e: LogEntry): boolean => e.type === 'note' && e.what === 'zero';

export function countLines(entries: readonly LogEntry[]): Record<string, number> {
  const counts: Record<string, number> = {
    pulse: 0,
    pulsesCounted: 0,
    pulsesMissed: 0,
    item: 0,
    itemsShown: 0,
    itemsNotShown: 0,
    key: 0,
    response: 0,
    drop: 0,
    framesDropped: 0,
    focus: 0,
    override: 0,
    note: 0
  };
  const more = (what: string, by = 1) => (counts[what] = (counts[what] ?? 0) + by);
  for (const e of entries) {
    more(e.type);
    if (e.type === 'pulse' && e.state === 'counted') more('pulsesCounted');
    if (e.type === 'pulse' && e.state === 'missed') more('pulsesMissed');
    if (e.type === 'item' && e.state === 'on') more('itemsShown');
    if (e.type === 'item' && e.state === 'not-shown') more('itemsNotShown');
    if (e.type === 'drop') more('framesDropped', e.frames);
  }
  return counts;
}

export interface LogEnding {
  state: EndState;
  reason: string;
  /** Page seconds. */
  page: number;
}

/** The whole log as lines of JSON; the last one counts and seals those before it. */
export function writeLog(header: LogHeader, entries: readonly LogEntry[], ending: LogEnding): string[] {
  const zero = zeroOf(entries);
  const fromZero = (page: number) => (zero === null ? null : roundMicro(page - zero));
  const kept = standing(entries);
  const lines = [JSON.stringify(header)];
  for (const entry of kept) {
    const { type, page, ...rest } = entry;
    const line: Record<string, unknown> = { type, time: fromZero(page), page, ...rest };
    if (entry.type === 'item') line.onset = entry.shown === null ? null : fromZero(entry.shown);
    lines.push(JSON.stringify(line));
  }
  const end: LogEnd = {
    type: 'end',
    time: fromZero(ending.page),
    page: roundMicro(ending.page),
    state: ending.state,
    reason: ending.reason,
    counts: countLines(kept),
    sha256: sha256Hex(lines.map((l) => `${l}\n`).join(''))
  };
  lines.push(JSON.stringify(end));
  return lines;
}

/** `sub-07_ses-1_task-label_run-01_attempt-1` and what follows. */
export function fileStem(header: LogHeader): string {
  const session = header.session ? `_ses-${header.session}` : '';
  return `sub-${header.participant}${session}_task-${header.task}_run-${header.run.index}_attempt-${header.attempt}`;
}
