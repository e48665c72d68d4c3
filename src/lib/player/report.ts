/** What a rehearsal (or a run) was like: onset errors, dropped frames, pulses, answers. */
import type { EventRow } from '$lib/task/events';
import { standing, zeroOf } from './log';
import type { LogEntry, LogHeader } from './log-lines';
import { scannerClock } from './performance';
import type { Schedule } from './schedule';

export interface Summary {
  count: number;
  mean: number;
  sd: number;
  median: number;
  /** Largest by size, with its sign. */
  worst: number;
}
export interface ConditionReport {
  conditionId: string | null;
  name: string;
  windows: number;
  answered: number;
  missing: number;
  correct: number;
  wrong: number;
  /** Correct ÷ (correct + wrong + missing) where a correct response is defined; null elsewhere. */
  accuracy: number | null;
  /** Seconds from the row's onset; null where nothing was answered. */
  meanRt: number | null;
  medianRt: number | null;
}
export interface Report {
  items: { planned: number; shown: number; notShown: number };
  /** Frame interval the errors are counted in, seconds. */
  frameInterval: number;
  /** Onset as shown minus as planned, in frames; visible items. */
  onsetErrors: Summary | null;
  /** Shares of visible onsets by error, in quarters of a frame from −1 to 1; the outer bins hold what lies beyond. */
  histogram: { from: number; to: number; count: number }[];
  frames: { dropped: number; drops: number };
  pulses: {
    expected: number;
    found: number;
    missed: number;
    ignored: number;
    /** s */ measuredTr: number | null;
  };
  presses: { in: number; early: number; late: number; unassigned: number };
  conditions: ConditionReport[];
}

export interface ReportInput {
  header: LogHeader;
  entries: readonly LogEntry[];
  schedule: Schedule;
  rows: readonly EventRow[];
  frameInterval: number;
  conditionName: (id: string | null) => string;
}

export function makeReport(input: ReportInput): Report {
  const { header, schedule, frameInterval } = input;
  const entries = standing(input.entries);
  const errors = onsetErrors(header, entries, frameInterval);
  const count = (test: (e: LogEntry) => boolean) => entries.reduce((n, e) => n + (test(e) ? 1 : 0), 0);
  const place = (p: string) => count((e) => e.type === 'response' && e.state === 'press' && e.place === p);
  const isPulse = (state: string) => (e: LogEntry) => e.type === 'pulse' && e.state === state;
  const { mode, perVolume, beforeZero } = header.pulses;
  const perRun = (beforeZero + schedule.volumes) * (mode === 'several-per-volume' ? perVolume : 1);
  return {
    items: {
      planned: schedule.items.length,
      shown: count((e) => e.type === 'item' && e.state === 'on'),
      notShown: count((e) => e.type === 'item' && e.state === 'not-shown')
    },
    frameInterval,
    onsetErrors: summarise(errors),
    histogram: histogramOf(errors),
    frames: {
      dropped: entries.reduce((n, e) => n + (e.type === 'drop' ? e.frames : 0), 0),
      drops: count((e) => e.type === 'drop')
    },
    pulses: {
      expected: mode === 'once' ? 1 : perRun,
      found: count(isPulse('counted')),
      missed: count(isPulse('missed')),
      ignored: count(isPulse('ignored')),
      measuredTr: measuredTr(entries)
    },
    presses: { in: place('in'), early: place('early'), late: place('late'), unassigned: place('unassigned') },
    conditions: byCondition(input, entries)
  };
}

function onsetErrors(header: LogHeader, entries: readonly LogEntry[], frameInterval: number): number[] {
  const zero = zeroOf(entries);
  if (zero === null) return [];
  const clock =
    (header.timing === 'pulse-locked' ? scannerClock(header, entries) : null) ??
    ((page: number) => page - zero);
  return entries.flatMap((e) =>
    e.type === 'item' && e.state === 'on' && e.frame !== null && e.shown !== null
      ? [(clock(e.shown) - e.planned) / frameInterval]
      : []
  );
}

/** Mean time between counted first pulses of volumes, seconds a volume; null with fewer than two. */
function measuredTr(entries: readonly LogEntry[]): number | null {
  const first = entries.find((e) => e.type === 'pulse' && e.state === 'counted' && e.part === 0);
  const last = entries.findLast((e) => e.type === 'pulse' && e.state === 'counted' && e.part === 0);
  if (first?.type !== 'pulse' || last?.type !== 'pulse' || first.volume === null || last.volume === null)
    return null;
  return last.volume > first.volume ? (last.page - first.page) / (last.volume - first.volume) : null;
}

export function summarise(values: readonly number[]): Summary | null {
  if (!values.length) return null;
  const mean = values.reduce((a, b) => a + b, 0) / values.length;
  const variance = values.reduce((a, b) => a + (b - mean) ** 2, 0) / Math.max(1, values.length - 1);
  const worst = values.reduce((a, b) => (Math.abs(b) > Math.abs(a) ? b : a));
  return { count: values.length, mean, sd: Math.sqrt(variance), median: medianOf(values), worst };
}

function medianOf(values: readonly number[]): number {
  const sorted = [...values].sort((a, b) => a - b);
  const middle = sorted.length >> 1;
  return sorted.length % 2 ? sorted[middle]! : (sorted[middle - 1]! + sorted[middle]!) / 2;
}

function histogramOf(errors: readonly number[]): Report['histogram'] {
  const bins = Array.from({ length: 8 }, (_, i) => ({ from: -1 + i / 4, to: -0.75 + i / 4, count: 0 }));
  for (const e of errors) bins[Math.max(0, Math.min(7, Math.floor((e + 1) * 4)))]!.count += 1;
  return bins;
}

function byCondition(
  { schedule, rows, conditionName }: ReportInput,
  entries: readonly LogEntry[]
): ConditionReport[] {
  const conditionOf = new Map(schedule.windows.map((w) => [w.trialId, w.conditionId]));
  const numberOf = new Map(schedule.windows.map((w) => [w.trial, w.conditionId]));
  const ids = [...new Set(schedule.windows.map((w) => w.conditionId))];
  return ids.map((conditionId): ConditionReport => {
    const answers = entries.flatMap((e) =>
      e.type === 'response' &&
      e.state !== 'press' &&
      e.trialId !== null &&
      conditionOf.get(e.trialId) === conditionId
        ? [e.state]
        : []
    );
    const of = (state: string) => answers.filter((a) => a === state).length;
    const judged = of('correct') + of('wrong');
    const rts = rows.flatMap((r) =>
      r.response_time !== null && numberOf.get(r.trial) === conditionId ? [r.response_time] : []
    );
    const defined = schedule.windows.some((w) => w.conditionId === conditionId && w.window.correct !== null);
    return {
      conditionId,
      name: conditionName(conditionId),
      windows: answers.length,
      answered: judged + of('answered'),
      missing: of('missing'),
      correct: of('correct'),
      wrong: of('wrong'),
      accuracy: defined && answers.length ? of('correct') / (judged + of('missing')) : null,
      meanRt: rts.length ? rts.reduce((a, b) => a + b, 0) / rts.length : null,
      medianRt: rts.length ? medianOf(rts) : null
    };
  });
}
