import { readFileSync, readdirSync } from 'node:fs';
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { compileRun } from '../../../src/lib/task/compile';
import { eventsTsv, plannedEvents } from '../../../src/lib/task/events';
import { decodeTable, importEventTable } from '../../../src/lib/task/import';
import { readDocument } from '../../../src/lib/task/upgrade';
import { sampleTask } from './sample';

const FOLDER = new URL('../../fixtures/events/', import.meta.url);
const { doc } = sampleTask();
const table = (...rows: string[]) => ['onset\tduration\ttrial_type', ...rows].join('\n') + '\n';
const taken = (text: string) => {
  const result = importEventTable(doc, text);
  if (!result.ok) throw new Error(result.message);
  return result;
};
const message = (text: string) => {
  const result = importEventTable(doc, text);
  return result.ok ? 'taken' : result.message;
};

describe('importing an event table', () => {
  for (const file of readdirSync(FOLDER).filter((f) => f.endsWith('.tsv')))
    it(`takes ${file} whole: every event with its onset, duration and condition`, () => {
      const text = readFileSync(new URL(file, FOLDER), 'utf8');
      const { edit, report } = taken(text);
      const run = edit.document.runs.at(-1)!;
      const wanted = text
        .trimEnd()
        .split('\n')
        .slice(1)
        .map((l) => l.split('\t'))
        .map(([onset, duration, type]) => [Number(onset), Number(duration), type!.trim()])
        .sort((a, b) => Number(a[0]) - Number(b[0]));
      expect(report.skipped).toEqual([]);
      expect(
        compileRun(edit.document, run).events.map((e) => [e.onset / 1e6, e.duration / 1e6, e.trialType])
      ).toEqual(wanted);
      expect(readDocument(edit.document).ok).toBe(true);
    });

  it('gives back what it took, through the planned event table', () => {
    const { edit } = taken(table('20.001\t2.000\tword', '22.501\t0.500\tpseudoword', '25.001\t2.000\tword'));
    const again = eventsTsv(plannedEvents(edit.document, edit.document.runs.at(-1)!))
      .trimEnd()
      .split('\n')
      .slice(1);
    expect(again.map((l) => l.split('\t').slice(0, 3))).toEqual([
      ['20.001', '2.000', 'word'],
      ['22.501', '0.500', 'pseudoword'],
      ['25.001', '2.000', 'word']
    ]);
  });

  it('reports skipped lines with line and reason, columns not used, and what it assumed', () => {
    const { report } = taken(
      'onset\tduration\ttrial_type\taccuracy\n1.5\t2\tword\t1\nlater\t2\tword\t1\n4\t-1\tword\t1\n6\tn/a\tword\t0\n8\t2\tn/a\t0\n9\t2\n'
    );
    expect(report.trials).toBe(2);
    expect(report.unusedColumns).toEqual(['accuracy']);
    expect(report.skipped).toEqual([
      { line: 3, reason: 'onset ‘later’ is not a number of seconds' },
      { line: 4, reason: 'duration ‘-1’ is negative' },
      { line: 6, reason: 'has no trial_type' },
      { line: 7, reason: 'has 2 cells, the header has 4' }
    ]);
    expect(report.warnings).toEqual([expect.stringMatching(/1 durations were unknown/)]);
  });

  it('uses a condition of the task that has the name, and makes the others', () => {
    const { report, edit } = taken(table('1\t2\tfollow-chime', '5\t2\tnew one'));
    expect(report.conditions).toEqual([
      { name: 'follow-chime', trials: 1, made: false },
      { name: 'new one', trials: 1, made: true }
    ]);
    expect(edit.document.brief.conditions).toHaveLength(doc.brief.conditions.length + 1);
  });

  it('gives the run the volumes that the table needs', () => {
    const { edit, report } = taken(table('400\t2\tword'));
    expect(edit.document.runs.at(-1)!.volumes).toBe(268);
    expect(report.warnings[0]).toMatch(/268 volumes/);
  });

  it('never cuts a character in half, which the store would refuse', () => {
    const name = 'a' + '😀'.repeat(80);
    const result = importEventTable(doc, table(`1\t2\t${name}`), { name });
    if (!result.ok) throw new Error(result.message);
    const { cards, runs } = result.edit.document;
    for (const text of [cards.at(-1)!.name, runs.at(-1)!.name])
      expect(text).not.toMatch(/[\uD800-\uDBFF](?![\uDC00-\uDFFF])/);
    expect(runs.at(-1)!.name).toBe('a' + '😀'.repeat(29));
  });

  it('refuses what is no event table, saying what is expected', () => {
    expect(message('')).toMatch(/empty/);
    expect(message('a,b\n1,2\n')).toMatch(/not separated by tabs/);
    expect(message('start\tlength\n1\t2\n')).toMatch(
      /no column ‘onset’ and ‘duration’.*this one has: start, length/
    );
    expect(message('onset\tduration\n')).toMatch(/No row/);
    const many = table(...Array.from({ length: 5001 }, (_, i) => `${i}\t0.5\tword`));
    expect(message(many)).toBe(
      'The table has 5,001 events; a run holds at most 5,000. Split the table into several runs.'
    );
    expect(message(table(...Array.from({ length: 150 }, (_, i) => `${i}\t1\tkind ${i}`)))).toMatch(
      /at most 100/
    );
  });

  it('refuses bytes that are no UTF-8 text', () => {
    const of = (bytes: number[]) => decodeTable(Uint8Array.from(bytes));
    expect(of([])).toMatchObject({ ok: false, message: expect.stringMatching(/empty/) });
    expect(of([0xff, 0xfe, 0x61, 0])).toMatchObject({ message: expect.stringMatching(/UTF-16/) });
    expect(of([0x89, 0x50, 0x4e, 0x47, 0, 1])).toMatchObject({
      message: expect.stringMatching(/not a text file/)
    });
    expect(of([0x6f, 0xe9, 0x0a])).toMatchObject({ message: expect.stringMatching(/UTF-8/) });
    expect(decodeTable(new Uint8Array(10_000_001))).toMatchObject({
      message: expect.stringMatching(/10\.0 MB/)
    });
    expect(decodeTable(new TextEncoder().encode('\ufeffonset\tduration\n1\t2\n'))).toMatchObject({
      ok: true
    });
  });

  it('never throws, whatever the text, and what it takes is a sound document', () => {
    const cell = fc.oneof(
      fc.string({ maxLength: 8 }),
      fc.double().map(String),
      fc.constantFrom('n/a', '', '3', '"')
    );
    fc.assert(
      fc.property(
        fc.array(fc.array(cell, { maxLength: 5 }), { maxLength: 6 }),
        fc.boolean(),
        (rows, headed) => {
          const body = rows.map((r) => r.join('\t')).join('\n');
          const result = importEventTable(doc, headed ? `onset\tduration\ttrial_type\n${body}` : body);
          if (result.ok) expect(readDocument(result.edit.document)).toMatchObject({ ok: true });
          else expect(result.message.length).toBeGreaterThan(10);
        }
      ),
      { numRuns: 300 }
    );
  });
});
