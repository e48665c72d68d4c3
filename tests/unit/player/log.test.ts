import { createHash } from 'node:crypto';
import { describe, expect, it } from 'vitest';
import { fileStem, isUrgent, writeLog } from '../../../src/lib/player/log';
import type { LogEntry } from '../../../src/lib/player/log-lines';
import { rowsOf } from '../../../src/lib/player/performance';
import { player, profileWith } from './support';

function wholeRun() {
  const p = player({ sound: true });
  p.runtime.arm(0);
  p.scan(1, 2, 10, 22);
  return p;
}
type Line = Record<string, unknown> & { type: string; time: number; page: number };
const parsed = (lines: string[]) => lines.map((l) => JSON.parse(l) as Line);

describe('the log', () => {
  const p = wholeRun();
  const lines = writeLog(p.header, p.log.entries, { state: 'complete', reason: 'the run is over', page: 21 });

  it('begins with the header and ends with the end', () => {
    expect(parsed(lines).at(0)).toMatchObject({
      type: 'header',
      format: 1,
      kind: 'PROOF',
      tr: 2,
      volumes: 10
    });
    expect(parsed(lines).at(-1)).toMatchObject({ type: 'end', state: 'complete' });
  });

  it('is in order of time', () => {
    const times = parsed(lines)
      .slice(1)
      .map((l) => l.time);
    expect(times).toEqual([...times].sort((a, b) => a - b));
  });

  it('ends with the SHA-256 of all lines before, and any change shows', () => {
    const before = lines
      .slice(0, -1)
      .map((l) => `${l}\n`)
      .join('');
    const end = parsed(lines).at(-1)!;
    expect(end.sha256).toBe(createHash('sha256').update(before).digest('hex'));
    const changed = createHash('sha256').update(before.replace('Digit5', 'Digit6')).digest('hex');
    expect(end.sha256).not.toBe(changed);
  });

  it('counts its lines by kind', () => {
    const all = parsed(lines).slice(1, -1);
    const counts = parsed(lines).at(-1)!.counts as Record<string, number>;
    for (const type of ['pulse', 'item', 'key', 'response', 'drop', 'focus', 'override', 'note'])
      expect([type, counts[type]]).toEqual([type, all.filter((l) => l.type === type).length]);
    expect(counts).toMatchObject({ pulsesCounted: 10, pulsesMissed: 0, itemsShown: 6, itemsNotShown: 0 });
  });

  it('put together again from kept entries gives the same event table, whole or cut short', () => {
    const kept = JSON.parse(JSON.stringify(p.log.entries)) as LogEntry[];
    expect(rowsOf(p.doc, p.run, p.header, kept)).toEqual(rowsOf(p.doc, p.run, p.header, p.log.entries));
    const cut = kept.slice(0, kept.findIndex((e) => e.type === 'item' && e.trial === 2) + 1);
    const rows = rowsOf(p.doc, p.run, p.header, cut);
    expect(rows.map((r) => r.trial)).toEqual([1, 1, 2]);
    expect(rows.at(-1)!.duration).toBeNull();
  });

  it('holds pulses, keys, answers and notes to be safe at once; items may wait', () => {
    const waits = new Set(p.log.entries.filter((e) => !isUrgent(e)).map((e) => e.type));
    expect([...waits]).toEqual(['item']);
  });

  it('names its file by participant, session, task, run and attempt', () => {
    const header = { ...p.header, participant: '07', session: '1', attempt: 2 };
    expect(fileStem(header)).toBe('sub-07_ses-1_task-chimelantern_run-1_attempt-2');
    expect(fileStem({ ...header, session: null })).toBe('sub-07_task-chimelantern_run-1_attempt-2');
  });
});

describe('scanner time', () => {
  it('takes a slow scanner out of onsets and durations', () => {
    const onsets = Array.from({ length: 60 }, (_, i) => 1 + i * 9.7);
    const p = player({ onsets, volumes: 300 }, profileWith());
    p.runtime.arm(0);
    p.scan(1, 2 * 1.00005, 300, 603);
    const last = rowsOf(p.doc, p.run, p.header, p.log.entries).at(-1)!;
    const frame = p.of('item').findLast((e) => e.state === 'on')!.frame!;
    // 573 s × 50 ppm = 29 ms: what the page's clock has gone further than the scanner's.
    expect(frame - last.onset!).toBeCloseTo(0.0287, 3);
  });

  it('stays with the page where the scanner has another TR than planned', () => {
    const p = player();
    p.runtime.arm(0);
    p.scan(1, 2.2, 10, 22);
    const frame = p.of('item').findLast((e) => e.state === 'on')!.frame!;
    expect(rowsOf(p.doc, p.run, p.header, p.log.entries).at(-1)!.onset).toBeCloseTo(frame, 6);
  });
});
