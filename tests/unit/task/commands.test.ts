import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import * as c from '../../../src/lib/task/commands';
import { compileRun, gapsOf } from '../../../src/lib/task/compile';
import { canRedo, commit, redo, startHistory, undo } from '../../../src/lib/task/history';
import { MAX_TRIALS, type TaskDocument } from '../../../src/lib/task/schema';
import { readDocument } from '../../../src/lib/task/upgrade';
import { sampleTask, withTrials } from './sample';

const onsets = (doc: TaskDocument) => compileRun(doc, doc.runs[0]!).trials.map((t) => t.onset / 1e6);
const idsInOrder = (doc: TaskDocument) => compileRun(doc, doc.runs[0]!).trials.map((t) => t.trial.id);

describe('trials', () => {
  it('places a card without moving anything else', () => {
    const sample = sampleTask();
    const doc = withTrials(sample, [
      ['lantern', 3],
      ['chime', 9]
    ]);
    const edit = c.placeTrial(doc, sample.runId, sample.lantern.card, 4_500_000);
    expect(onsets(edit.document)).toEqual([3, 4.5, 9]);
    expect(edit.words).toBe('placed lantern card at 4.500 s of Run 1');
    expect(onsets(doc)).toEqual([3, 9]);
  });

  it('inserts a card and pushes what follows, leaving the other gaps', () => {
    const sample = sampleTask();
    const doc = withTrials(sample, [
      ['lantern', 3],
      ['chime', 9],
      ['chime', 14]
    ]);
    const first = idsInOrder(doc)[0]!;
    const edit = c.insertTrial(doc, sample.runId, sample.chime.card, first, 1_500_000);
    expect(onsets(edit.document)).toEqual([3, 6.5, 12.5, 17.5]);
  });

  it('changes a gap by moving what follows', () => {
    const sample = sampleTask();
    const doc = withTrials(sample, [
      ['lantern', 3],
      ['chime', 9],
      ['chime', 14]
    ]);
    const edit = c.setGap(doc, sample.runId, idsInOrder(doc)[0]!, 1_000_000);
    expect(onsets(edit.document)).toEqual([3, 6, 11]);
    expect(() => c.setGap(doc, sample.runId, idsInOrder(doc)[2]!, 1)).toThrow(/no trial after/);
  });

  it('refuses to move a locked trial', () => {
    const sample = sampleTask();
    const doc = withTrials(sample, [
      ['lantern', 3],
      ['chime', 9]
    ]);
    const run = doc.runs[0]!;
    const locked = c.withRun(doc, {
      ...run,
      trials: run.trials.map((t, i) => (i === 1 ? { ...t, locked: true } : t))
    });
    expect(() => c.setGap(locked, run.id, run.trials[0]!.id, 0)).toThrow(/locked/);
    expect(() => c.removeTrials(locked, run.id, [run.trials[1]!.id])).toThrow(/locked/);
  });

  it('reordering keeps the trials, the start and the multiset of gaps that do not end the run', () => {
    fc.assert(
      fc.property(
        fc.array(fc.integer({ min: 0, max: 6000 }), { minLength: 2, maxLength: 12 }),
        fc.nat(),
        fc.nat(),
        (gapsMs, a, b) => {
          const sample = sampleTask();
          let at = 3;
          const doc = withTrials(
            sample,
            gapsMs.map((g, i) => {
              const here = at;
              at += 2 + g / 1000;
              return [i % 2 ? 'chime' : 'lantern', here] as ['lantern' | 'chime', number];
            })
          );
          const ids = idsInOrder(doc);
          const moving = ids[a % ids.length]!;
          const others = [null, ...ids.filter((id) => id !== moving)];
          const after = others[b % others.length]!;
          const moved = c.moveTrialAfter(doc, sample.runId, [moving], after).document;
          const order = idsInOrder(moved);
          expect(new Set(order)).toEqual(new Set(ids));
          expect(order.indexOf(moving)).toBe(after === null ? 0 : order.indexOf(after) + 1);
          expect(onsets(moved)[0]).toBe(3);
          expect(gapsOf(compileRun(moved, moved.runs[0]!).trials).every((g) => g >= 0)).toBe(true);
        }
      ),
      { numRuns: 60 }
    );
  });

  it('refuses more than 5,000 trials with that number', () => {
    const { doc, runId, lantern } = sampleTask();
    const run = doc.runs[0]!;
    const full = c.withRun(doc, {
      ...run,
      trials: Array.from({ length: MAX_TRIALS }, (_, i) => ({
        id: `trial-${i}-full`,
        card: lantern.card,
        onset: i * 1000
      }))
    });
    expect(() => c.placeTrial(full, runId, lantern.card, 0)).toThrow(/5,000 trials; this would make 5,001/);
    expect(readDocument(full).ok).toBe(true);
    const more = c.withRun(full, {
      ...full.runs[0]!,
      trials: [...full.runs[0]!.trials, { id: 'trial-one-more', card: lantern.card, onset: 0 }]
    });
    const reading = readDocument(more);
    expect(reading.ok ? '' : reading.problems[0]!.message).toMatch(/5,000 trials/);
  });

  it('duplicates after the last one and pushes the rest', () => {
    const sample = sampleTask();
    const doc = withTrials(sample, [
      ['lantern', 3],
      ['chime', 9],
      ['chime', 14]
    ]);
    const [first, second] = idsInOrder(doc);
    const edit = c.duplicateTrials(doc, sample.runId, [first!, second!]);
    expect(onsets(edit.document)).toEqual([3, 9, 14, 20, 25]);
  });
});

describe('brief and cards', () => {
  it('refuses bad values with the field and the reason, and changes nothing', () => {
    const { doc } = sampleTask();
    expect(() => c.editBrief(doc, { tr: 0 })).toThrow(/TR must be more than 0 s/);
    expect(() => c.editBrief(doc, { tr: -2_000_000 })).toThrow(/more than 0/);
    expect(() => c.editBrief(doc, { tr: Number('two') })).toThrow(/tr/);
    expect(() => c.editBrief(doc, { label: 'with-dash' })).toThrow(/letters and digits/);
    expect(() => c.addCondition(doc, 'follow-chime')).toThrow(/already/);
  });

  it('takes names with quotes, tabs, emoji, right-to-left text and tags as they are', () => {
    const { doc } = sampleTask();
    for (const name of [`"it's"`, 'tab\there', '🏮 lantern', 'פנס', '</script><script>alert(1)</script>']) {
      const made = c.addCondition(doc, name).document;
      expect(made.brief.conditions.at(-1)!.name).toBe(name);
      expect(readDocument(JSON.parse(JSON.stringify(made))).ok).toBe(true);
    }
  });

  it('removing a condition takes it out of contrasts and cards', () => {
    const { doc, chime, lantern } = sampleTask();
    const next = c.removeCondition(doc, chime.condition).document;
    expect(Object.keys(next.brief.contrasts[0]!.weights)).toEqual([lantern.condition]);
    expect(next.cards.find((k) => k.id === chime.card)!.condition).toBeNull();
    expect(readDocument(next).ok).toBe(true);
  });

  it('removing a card takes its trials, and says how many', () => {
    const sample = sampleTask();
    const doc = withTrials(sample, [
      ['lantern', 3],
      ['chime', 9],
      ['chime', 14]
    ]);
    const edit = c.removeCard(doc, sample.chime.card);
    expect(edit.words).toBe('removed card chime card and its 2 trials');
    expect(onsets(edit.document)).toEqual([3]);
  });

  it('removing a response takes its mention in windows', () => {
    const { doc, lantern } = sampleTask();
    const same = doc.brief.responses[0]!.id;
    const w = c.addWindow(doc, lantern.card);
    const set = c.editWindow(w.document, lantern.card, w.windowId, {
      allowed: [same],
      correct: same
    }).document;
    const next = c.removeResponse(set, same).document;
    expect(next.cards[0]!.windows[0]).toMatchObject({ allowed: [], correct: null });
    expect(readDocument(next).ok).toBe(true);
  });

  it('the correct response must be one that counts', () => {
    const { doc, lantern } = sampleTask();
    const [same, different] = doc.brief.responses.map((r) => r.id);
    const w = c.addWindow(doc, lantern.card);
    expect(() =>
      c.editWindow(w.document, lantern.card, w.windowId, { allowed: [same!], correct: different! })
    ).toThrow(/among the responses/);
  });
});

describe('history', () => {
  it('undoes and redoes exactly, and a new edit drops what was undone', () => {
    const sample = sampleTask();
    const h0 = startHistory(sample.doc);
    const h1 = commit(h0, c.placeTrial(sample.doc, sample.runId, sample.chime.card, 0));
    const h2 = commit(h1, c.setVolumes(h1.present, sample.runId, 50));
    const back = undo(undo(h2));
    expect(back.present).toBe(sample.doc);
    expect(undo(back)).toBe(back);
    expect(redo(redo(back)).present).toBe(h2.present);
    expect(canRedo(commit(back, c.setVolumes(back.present, sample.runId, 10)))).toBe(false);
  });
});
