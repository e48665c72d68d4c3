/** The files of one attempt, from what was kept of it: log, event table, sidecar. */
import { eventsTsv } from '$lib/task/events';
import { eventsSidecar, sidecarText } from '$lib/task/sidecar';
import { fileStem, writeLog, type LogEnding } from '../log';
import type { LogEntry, LogHeader } from '../log-lines';
import type { PlayerPayload } from '../payload';
import { rowsOf } from '../performance';
import type { OutFile } from './save';

export interface AttemptRecord {
  header: LogHeader;
  entries: readonly LogEntry[];
  ending: LogEnding;
}

export interface AttemptFiles {
  log: OutFile;
  events: OutFile;
  sidecar: OutFile;
}

/** An attempt that never came to its end ends where its last line stands. */
export const recoveredEnding = (entries: readonly LogEntry[]): LogEnding => ({
  state: 'recovered',
  reason: 'put together again from what was kept; the run did not come to its end',
  page: entries.reduce((latest, e) => Math.max(latest, e.page), 0)
});

export function attemptFiles(
  payload: PlayerPayload,
  { header, entries, ending }: AttemptRecord
): AttemptFiles {
  const { document: doc } = payload;
  const run = doc.runs.find((r) => r.id === header.run.id);
  const stem = fileStem(header);
  // BIDS knows no attempts: the first bears the plain name, later ones are told apart until one is chosen.
  const table = header.attempt > 1 ? stem : stem.replace(/_attempt-\d+$/, '');
  const stimFiles = Object.fromEntries(Object.entries(payload.assets).map(([sha, a]) => [sha, a.file]));
  const rows = run ? rowsOf(doc, run, header, entries, stimFiles) : [];
  const sidecar = eventsSidecar(doc, {
    profile: payload.profile,
    revision: header.revision,
    softwareVersion: `player ${header.build.slice(0, 12)}`,
    operatingSystem: header.browser
  });
  return {
    log: {
      name: `${stem}_log.jsonl`,
      text: writeLog(header, entries, ending)
        .map((line) => `${line}\n`)
        .join(''),
      mime: 'application/jsonl'
    },
    events: { name: `${table}_events.tsv`, text: eventsTsv(rows), mime: 'text/tab-separated-values' },
    sidecar: { name: `${table}_events.json`, text: sidecarText(sidecar), mime: 'application/json' }
  };
}
