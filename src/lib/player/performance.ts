/**
 * Log entries → what was performed, in scanner time, as the writer of event tables takes it. The same way is gone
 * after a run that ended well, after a crash and in Returns.
 */
import { performedEvents, type EventRow, type PerformedItem, type PerformedResponse } from '$lib/task/events';
import type { Run, TaskDocument } from '$lib/task/schema';
import { roundMicro } from './clock';
import { standing, zeroOf } from './log';
import type { LogEntry, LogHeader } from './log-lines';
import { PulseLine } from './pulse-line';

/**
 * Page seconds → scanner time (volume × TR, seconds from zero), by the line through the pulses. With fewer than four
 * pulses, one pulse at the start, or a scanner whose interval is not the planned TR (by 1 %), the page's own seconds
 * from zero. Null when there never was a zero.
 */
export function scannerClock(
  header: LogHeader,
  entries: readonly LogEntry[]
): ((page: number) => number) | null {
  const zero = zeroOf(entries);
  if (zero === null) return null;
  const { acquisitionTime, perVolume, mode } = header.pulses;
  const line = new PulseLine(header.tr);
  const part = mode === 'several-per-volume' ? acquisitionTime / perVolume / header.tr : 0;
  for (const e of standing(entries))
    if (e.type === 'pulse' && e.state === 'counted' && e.volume !== null)
      line.add(e.volume + (e.part ?? 0) * part, e.page);
  const agrees = Math.abs(line.measured / header.tr - 1) <= 0.01;
  if (mode === 'once' || line.count < 4 || !agrees) return (page) => page - zero;
  return (page) => line.positionAt(page) * header.tr;
}

export interface Performance {
  items: PerformedItem[];
  responses: PerformedResponse[];
}

/** Items shown and windows answered, seconds of scanner time. Empty when there never was a zero. */
export function performanceOf(header: LogHeader, entries: readonly LogEntry[]): Performance {
  const clock = scannerClock(header, entries);
  const items = new Map<string, PerformedItem>();
  const responses: PerformedResponse[] = [];
  if (!clock) return { items: [], responses };
  for (const e of standing(entries)) {
    if (e.type === 'item') {
      const key = `${e.trialId} ${e.itemId}`;
      const at = e.shown === null ? null : roundMicro(clock(e.shown));
      const known = items.get(key);
      if (e.state === 'off' && known && known.onset !== null && at !== null)
        known.duration = roundMicro(Math.max(0, at - known.onset));
      else if (e.state !== 'off')
        items.set(key, { trialId: e.trialId, itemId: e.itemId, onset: at, duration: null });
    } else if (e.type === 'response' && e.state !== 'press' && e.trialId !== null && e.windowId !== null) {
      const first = e.presses[0];
      responses.push({
        trialId: e.trialId,
        windowId: e.windowId,
        response: e.responses[0] ?? null,
        time: first === undefined ? null : roundMicro(clock(first)),
        correct: e.state === 'answered' ? null : e.state
      });
    }
  }
  return { items: [...items.values()], responses };
}

/** The rows of the performed event table. */
export function rowsOf(
  doc: TaskDocument,
  run: Run,
  header: LogHeader,
  entries: readonly LogEntry[],
  stimFiles: Record<string, string> = {}
): EventRow[] {
  const { items, responses } = performanceOf(header, entries);
  return performedEvents(doc, run, items, responses, stimFiles);
}
