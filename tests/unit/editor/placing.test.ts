import { describe, expect, it } from 'vitest';
import { endOnset, keepsOrder, placingOf, usualGap } from '../../../src/lib/editor/page/placing';
import { LineMemory, lineModels, neighbourOnLine } from '../../../src/lib/editor/page/line-model';
import { makeGeometry } from '../../../src/lib/editor/page/page-geometry';
import { rangeOf, trialByKey } from '../../../src/lib/editor/page/page-keys';
import { compileRun, type CompiledTrial } from '../../../src/lib/task/compile';
import { newCard, newDocument, newId } from '../../../src/lib/task/create';

const s = 1_000_000;
function run(onsets: number[], length = 2): CompiledTrial[] {
  const doc = newDocument({ title: 'Tide', label: 'tide', tr: 1.5 * s, volumes: 100 });
  const card = newCard('word', null, length * s);
  doc.cards.push(card);
  doc.runs[0]!.trials = onsets.map((t) => ({ id: newId(), card: card.id, onset: t * s }));
  return compileRun(doc, doc.runs[0]!).trials;
}
const at = (others: CompiledTrial[], pointer: number, onset = pointer, length = 2) =>
  placingOf({
    others,
    pointer: pointer * s,
    onset: onset * s,
    length: length * s,
    grid: 'TR/4',
    tr: 1.5 * s
  });

describe('where a dragged trial goes', () => {
  const trials = run([6, 12, 30]);
  it('is the grid point under it, in a blank', () => {
    expect(at(trials, 20.1)).toEqual({ kind: 'at', onset: 20.25 * s });
    expect(at([], 7.4)).toEqual({ kind: 'at', onset: 7.5 * s });
    expect(at(trials, 100)).toEqual({ kind: 'at', onset: 100.125 * s });
  });
  it('is slid, so that it overlaps neither neighbour', () => {
    expect(at(trials, 29)).toEqual({ kind: 'at', onset: 28 * s });
    expect(at(trials, 8.01, 7.5)).toEqual({ kind: 'at', onset: 8 * s });
    expect(at(trials, 1, -3)).toEqual({ kind: 'at', onset: 0 });
  });
  it('is a place in the order, over another trial or a blank too short', () => {
    const ids = trials.map((t) => t.trial.id);
    expect(at(trials, 12.5)).toEqual({ kind: 'after', after: ids[0] });
    expect(at(trials, 13.5)).toEqual({ kind: 'after', after: ids[1] });
    expect(at(trials, 6.5)).toEqual({ kind: 'after', after: null });
    expect(at(trials, 9, 9, 5)).toEqual({ kind: 'after', after: ids[0] });
    expect(at(trials, 3, 3, 7)).toEqual({ kind: 'after', after: null });
  });
  it('knows when the order would stay as it is', () => {
    const ids = trials.map((t) => t.trial.id);
    expect(keepsOrder(trials, new Set([ids[1]!]), ids[0]!)).toBe(true);
    expect(keepsOrder(trials, new Set([ids[0]!]), null)).toBe(true);
    expect(keepsOrder(trials, new Set([ids[1]!]), ids[2]!)).toBe(false);
    expect(keepsOrder(trials, new Set([ids[0]!, ids[2]!]), ids[1]!)).toBe(false);
  });
  it('gives a new trial the usual gap, and never lets it overlap the last', () => {
    expect(usualGap(run([0, 5, 10, 40]), 'TR/4', 1.5 * s)).toBe(3 * s);
    expect(usualGap(run([0, 1]), 'TR', 1.5 * s)).toBe(1.5 * s);
    expect(endOnset([], 'TR', 1.5 * s)).toBe(0);
    for (const last of [0.1, 0.9, 3.333, 7.7]) {
      const trials = run([last]);
      expect(endOnset(trials, 'TR', 1.5 * s)).toBeGreaterThanOrEqual(trials[0]!.end);
    }
  });
});

describe('what stands on the lines', () => {
  const g = makeGeometry(60 * s, 600, 0, 150 * s);
  it('is a block where a trial begins, a tail where it goes on, and a grip for each gap', () => {
    const models = lineModels(g, run([3, 59, 70]));
    expect(models.get(0)?.blocks).toHaveLength(2);
    expect(models.get(1)?.tails).toHaveLength(1);
    // The broken trial's gap is on the line where it ends.
    expect(models.get(1)?.gaps.map((m) => m.gap / s)).toEqual([9]);
    expect(models.get(0)?.gaps.map((m) => m.gap / s)).toEqual([54]);
  });
  it('keeps the models of lines that did not change, and the lists where only times did', () => {
    const memory = new LineMemory();
    const trials = run([3, 20, 70]);
    const cards = {};
    const first = memory.keep(g, lineModels(g, trials), cards);
    const before = [first.get(0), first.get(1)];
    const moved = trials.map((t, i) => (i === 2 ? { ...t, onset: t.onset + s, end: t.end + s } : t));
    const second = memory.keep(g, lineModels(g, moved), cards);
    expect(second.get(0)?.blocks).not.toBe(before[0]?.blocks); // its last gap leads to the moved trial
    expect(second.get(0)?.items).toBe(before[0]?.items);
    expect(second.get(1)).not.toBe(before[1]);
    const third = memory.keep(g, lineModels(g, moved), cards);
    expect(third.get(1)).toBe(second.get(1));
    expect(memory.keep(g, lineModels(g, moved), {}).get(1)).not.toBe(second.get(1));
  });
  it('is walked by keys: along the order, and to the nearest on the next line', () => {
    const trials = run([3, 20, 40, 70, 99, 130]);
    const key = (k: string, i: number) =>
      trialByKey({ key: k, altKey: false, ctrlKey: false, metaKey: false }, g, trials, trials[i]!);
    expect(key('ArrowRight', 0)).toBe(trials[1]);
    expect(key('ArrowLeft', 0)).toBeUndefined();
    expect(key('ArrowDown', 2)).toBe(trials[4]);
    expect(key('ArrowUp', 5)).toBe(trials[3]);
    expect(key('ArrowUp', 0)).toBeUndefined();
    expect(key('End', 0)).toBe(trials[5]);
    expect(neighbourOnLine(g, run([3, 130]), run([3, 130])[0]!, 1)?.onset).toBe(130 * s);
    const ids = trials.map((t) => t.trial.id);
    expect(rangeOf(trials, ids[4]!, ids[2]!)).toEqual(ids.slice(2, 5));
  });
});
