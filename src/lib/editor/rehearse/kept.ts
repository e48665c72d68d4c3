/** What is kept of a rehearsal beside the task's save, and what of a kept one can be shown. */
import type { Report } from '$lib/player/report';
import { call, sendJson, type Answer } from '../forms/client';

export interface Settings {
  speed: 'real' | 'virtual';
  answers: 'keyboard' | 'automatic';
  /** Seconds. */
  jitterSd: number;
  /** Share of pulses that do not arrive. */
  missRate: number;
  seed: string;
}

/** The body of a kept rehearsal's report. */
export interface KeptReport {
  runName: string;
  settings: Settings;
  partial: boolean;
  report: Report;
}

export interface KeptRehearsal {
  id: string;
  saveNumber: number;
  run: string;
  author: string | null;
  at: string;
  report: unknown;
}

export const listKept = (task: string): Promise<Answer<{ items: KeptRehearsal[] }>> =>
  call(`/api/v1/tasks/${task}/rehearsals`);

export const keep = (
  task: string,
  run: string,
  saveNumber: number,
  report: KeptReport
): Promise<Answer<{ kept: boolean; id: string | null }>> =>
  call(`/api/v1/tasks/${task}/rehearsals`, sendJson('POST', { run, saveNumber, report }));

/** A kept report that this version can show, or null for one of another shape. */
export function readKept(report: unknown): KeptReport | null {
  const kept = report as Partial<KeptReport> | null;
  const inner = kept?.report as Partial<Report> | undefined;
  const isWhole =
    typeof kept?.runName === 'string' &&
    typeof kept.partial === 'boolean' &&
    kept.settings !== undefined &&
    Array.isArray(inner?.histogram) &&
    Array.isArray(inner.conditions) &&
    inner.items !== undefined &&
    inner.pulses !== undefined;
  return isWhole ? (kept as KeptReport) : null;
}

const signed = (x: number) =>
  x
    .toFixed(2)
    .replace('-', '−')
    .replace(/^−(0\.00)$/, '$1');
const count = (n: number, one: string) => `${n.toLocaleString('en')} ${one}${n === 1 ? '' : 's'}`;

/** What a report says, worst first, in sentences. */
export function reportWords({ report, partial }: Pick<KeptReport, 'report' | 'partial'>): string[] {
  const words: string[] = [];
  if (partial) words.push('Ended before its end: the figures are of the part that ran.');
  const { items, onsetErrors, frames, pulses, presses } = report;
  words.push(
    items.notShown > 0
      ? `${count(items.notShown, 'item')} of ${items.planned.toLocaleString('en')} could not be shown.`
      : `All ${count(items.shown, 'item')} came on.`
  );
  if (onsetErrors) {
    words.push(
      `Onsets are off by ${signed(onsetErrors.mean)} ± ${onsetErrors.sd.toFixed(2)} frames, at worst ${signed(onsetErrors.worst)}.`
    );
  }
  words.push(frames.dropped > 0 ? `${count(frames.dropped, 'frame')} dropped.` : 'No frame dropped.');
  const tr = pulses.measuredTr === null ? '' : `; measured TR ${pulses.measuredTr.toFixed(4)} s`;
  words.push(`${pulses.found} of ${pulses.expected} pulses found, ${pulses.missed} missed${tr}.`);
  const stray = presses.early + presses.late + presses.unassigned;
  if (stray > 0) {
    words.push(
      `${stray} ${stray === 1 ? 'press' : 'presses'} outside a window: ${presses.early} early, ${presses.late} late, ${presses.unassigned} unassigned.`
    );
  }
  return words;
}
