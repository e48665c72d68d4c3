import { describe, expect, it } from 'vitest';
import { countsOf, kindsOf, usableContrasts } from '../../../../src/lib/editor/search/kinds';
import { plainProblem, scorePresent, trialsOf } from '../../../../src/lib/editor/search/problem';
import type { FromWorker } from '../../../../src/lib/editor/search/protocol';
import { engineRules, firstRules, ruleProblems } from '../../../../src/lib/editor/search/rules-form';
import { runSearch } from '../../../../src/lib/editor/search/run-search';
import { designReport } from '../../../../src/lib/engine/design/report';
import {
  addCard,
  addCondition,
  addContrast,
  adoptTrials,
  copyCard,
  placeTrial
} from '../../../../src/lib/task/commands';
import { compileRun, factorsOf, gapsOf } from '../../../../src/lib/task/compile';
import { newDocument } from '../../../../src/lib/task/create';
import { designInput } from '../../../../src/lib/task/model';
import { defaultProfile } from '../../../../src/lib/task/profile';
import type { TaskDocument } from '../../../../src/lib/task/schema';

const profile = defaultProfile();

/** Two conditions, a difference and a mean, twelve trials of each every 6 s in alternation. */
function task(): TaskDocument {
  let document = newDocument({ title: 'Lanterns', label: 'lanterns', tr: 1_500_000, volumes: 140 });
  const cards: string[] = [];
  for (const name of ['follow-lantern', 'follow-chime']) {
    const condition = addCondition(document, name);
    const card = addCard(condition.document, name, condition.conditionId);
    document = card.document;
    cards.push(card.cardId);
  }
  const [a, b] = document.brief.conditions.map((c) => c.id);
  ({ document } = addContrast(document, 'difference', { [a!]: 1, [b!]: -1 }));
  ({ document } = addContrast(document, 'both', { [a!]: 0.5, [b!]: 0.5 }));
  const run = document.runs[0]!.id;
  for (let i = 0; i < 24; i++)
    ({ document } = placeTrial(document, run, cards[i % 2]!, 3_000_000 + i * 6_000_000));
  return document;
}
const parts = (document: TaskDocument) => {
  const factors = factorsOf(document);
  const kinds = kindsOf(document, factors);
  return { factors, kinds, run: document.runs[0]!, contrasts: usableContrasts(document, factors) };
};

describe('kinds of trial', () => {
  it('are one for each condition, named by it, with the counts of the run', () => {
    const { kinds, run } = parts(task());
    expect(kinds.map((k) => k.name)).toEqual(['follow-lantern', 'follow-chime']);
    expect(kinds.map((k) => k.duration)).toEqual([2, 2]);
    expect(countsOf(kinds, run)).toEqual([12, 12]);
  });

  it('put cards together that the design cannot tell apart, and keep the others', () => {
    const document = task();
    const copied = copyCard(document, document.cards[0]!.id);
    expect(parts(copied.document).kinds.map((k) => k.cards.length)).toEqual([2, 1]);
    const longer = {
      ...copied.document,
      cards: copied.document.cards.map((c) => (c.id === copied.cardId ? { ...c, duration: 3_000_000 } : c))
    };
    expect(parts(longer).kinds.map((k) => k.name)).toEqual([
      'follow-lantern',
      'follow-lantern 3',
      'follow-chime'
    ]);
  });
});

describe('rules', () => {
  it('begin with values that can be kept, for full and for empty runs', () => {
    const full = task();
    const empty = { ...full, runs: full.runs.map((r) => ({ ...r, trials: [] })) };
    for (const document of [full, empty]) {
      const { kinds, run } = parts(document);
      const form = firstRules(document, run, kinds);
      expect(ruleProblems(engineRules(document, run, kinds, form), kinds, run, 1)).toEqual([]);
      expect(form.counts.reduce((a, b) => a + b, 0)).toBeGreaterThan(20);
    }
  });

  it('say in sentences, with the conditions by name, why a search cannot start', () => {
    const document = task();
    const { kinds, run } = parts(document);
    const form = firstRules(document, run, kinds);
    const words = (change: Partial<typeof form>, contrasts = 1) =>
      ruleProblems(engineRules(document, run, kinds, { ...form, ...change }), kinds, run, contrasts).join(
        ' '
      );
    expect(words({ counts: [90, 90] })).toContain('the run has 210 s');
    expect(words({ counts: [20, 2], gapMean: 3, maxInARow: 3 })).toContain('‘follow-lantern’');
    expect(words({ gapMin: 9, gapMax: 2 })).toContain('smallest gap (9 s) is above the largest gap (2 s)');
    expect(words({}, 0)).toContain('No contrast is chosen');
    expect(ruleProblems(engineRules(document, run, [], form), [], run, 1)[0]).toContain('no trial card yet');
    const locked = { ...run, trials: run.trials.map((t, i) => (i === 0 ? { ...t, locked: true } : t)) };
    expect(ruleProblems(engineRules(document, run, kinds, form), kinds, locked, 1)[0]).toContain(
      '1 locked trial'
    );
  });
});

describe('a search', () => {
  const search = async (iterations: number, seed: string, stopAfter = Infinity) => {
    const document = task();
    const { factors, kinds, run, contrasts } = parts(document);
    const form = firstRules(document, run, kinds);
    const problem = plainProblem(document, run, profile, factors, kinds, contrasts, form);
    const present = scorePresent(problem, document, run, factors);
    const heard: FromWorker[] = [];
    let pauses = 0;
    await runSearch(
      {
        type: 'start',
        problem: structuredClone(problem),
        seed,
        presentScore: present.score,
        budget: { iterations }
      },
      (m) => heard.push(m),
      () => pauses > stopAfter,
      async () => void pauses++,
      () => pauses * 100
    );
    const end = heard.at(-1)!;
    if (end.type !== 'done') throw new Error(`not done: ${JSON.stringify(end)}`);
    return { document, run, kinds, factors, form, problem, present, heard, end };
  };

  it('scores the present run as the design report does', async () => {
    const { document, run, present } = await search(0, 'a');
    const report = designReport(designInput(document, run, profile));
    report.contrasts.forEach((c, i) => expect(present.perContrast[i]! / c.efficiency).toBeCloseTo(1, 9));
  });

  it('finds better timing than an even alternation, adopts it by the rules, and the report confirms the score', async () => {
    const { document, run, kinds, form, present, end, heard } = await search(20_000, 'a');
    expect(end.best.score).toBeGreaterThan(present.score * 1.2);
    expect(heard.filter((m) => m.type === 'progress').length).toBeGreaterThan(2);
    expect(end.progress.iterations).toBe(20_000);

    const edit = adoptTrials(document, run.id, trialsOf(end.best, kinds, 'a'), 'adopted');
    const after = edit.document.runs[0]!;
    const { trials } = compileRun(edit.document, after);
    expect(countsOf(kinds, after)).toEqual(form.counts);
    const grid = document.brief.tr / 4;
    for (const t of trials) expect(t.onset).toBe(Math.round(Math.round(t.onset / grid) * grid));
    for (const gap of gapsOf(trials)) {
      expect(gap / 1e6).toBeGreaterThanOrEqual(form.gapMin - 1e-9);
      expect(gap / 1e6).toBeLessThanOrEqual(form.gapMax + 1e-9);
    }
    const report = designReport(designInput(edit.document, after, profile));
    report.contrasts.forEach((c, i) => expect(end.best.perContrast[i]! / c.efficiency).toBeCloseTo(1, 9));
  });

  it('gives the same candidate for the same seed and number of moves, another for another seed', async () => {
    const [one, two, other] = [await search(4000, 'a'), await search(4000, 'a'), await search(4000, 'b')];
    expect(two.end.best).toEqual(one.end.best);
    expect(other.end.best).not.toEqual(one.end.best);
  });

  it('stops when asked and keeps the best so far', async () => {
    const { end } = await search(1_000_000, 'a', 2);
    expect(end).toMatchObject({ stopped: true });
    expect(end.progress.iterations).toBeLessThan(20_000);
    expect(end.best.order).toHaveLength(24);
  });

  it('says what is wrong instead of falling silent', async () => {
    const heard: FromWorker[] = [];
    const { problem } = await search(0, 'a');
    await runSearch(
      {
        type: 'start',
        problem: { ...problem, rules: { ...problem.rules, gapMin: 99 } },
        seed: 'a',
        presentScore: 0,
        budget: { iterations: 1 }
      },
      (m) => heard.push(m),
      () => false
    );
    expect(heard).toEqual([{ type: 'failed', message: expect.stringContaining('smallest gap') }]);
  });
});

describe('cards that share a kind', () => {
  it('get its places evenly, in an order that the seed decides', () => {
    const document = task();
    const copied = copyCard(document, document.cards[0]!.id);
    const { kinds } = parts(copied.document);
    const order = Array.from({ length: 21 }, (_, i) => (i < 11 ? 0 : 1));
    const onsets = order.map((_, i) => i * 4.5);
    const made = trialsOf({ order, onsets }, kinds, 'x');
    const uses = (card: string) => made.filter((t) => t.card === card).length;
    expect(kinds[0]!.cards.map((c) => uses(c.id))).toEqual([6, 5]);
    expect(trialsOf({ order, onsets }, kinds, 'x')).toEqual(made);
    expect(made.map((t) => t.onset)).toEqual(onsets.map((s) => s * 1e6));
  });
});
