import fc from 'fast-check';
import { describe, expect, it, vi } from 'vitest';
import { peakScale } from '$lib/engine/convolution/peak-scale';
import { regressor } from '$lib/engine/convolution/regressor';
import { designReport } from '$lib/engine/design/report';
import { EngineError } from '$lib/engine/errors';
import { doubleGamma } from '$lib/engine/response/double-gamma';
import { eventsOf, scoreEvents, Search, type SearchProblem, type SearchRules } from '$lib/engine/search';

// Seconds of arithmetic, more on a machine that does other things as well.
vi.setConfig({ testTimeout: 60_000 });

const response = doubleGamma();

function rulesWith(changes: Partial<SearchRules> = {}): SearchRules {
  return {
    lengthSeconds: 200,
    volumes: 100,
    tr: 2,
    grid: 0.5,
    counts: [10, 10],
    durations: [2, 2],
    gapMin: 2,
    gapMean: 5,
    gapMax: 12,
    maxInARow: 3,
    leadIn: 4,
    leadOut: 12,
    ...changes
  };
}

function problemWith(rules: SearchRules, changes: Partial<SearchProblem> = {}): SearchProblem {
  return {
    rules,
    response,
    times: Float64Array.from({ length: rules.volumes }, (_, n) => (n + 0.5) * rules.tr),
    highPass: 128,
    noise: { kind: 'ar1', rho: 0.3, rhoTr: 2 },
    contrasts: [
      [1, 0],
      [0, 1],
      [1, -1]
    ],
    modelled: rules.durations.map((duration) => ({ offset: 0, duration })),
    ...changes
  };
}

/** Every broken rule of a candidate, in words; written apart from the search's own code. */
function brokenRules(rules: SearchRules, order: number[], onsets: number[]): string[] {
  const broken: string[] = [];
  const slack = 1.5e-6; // onsets are rounded to the microsecond
  const ends = onsets.map((onset, t) => onset + rules.durations[order[t]!]!);
  const gaps = onsets.slice(1).map((onset, t) => onset - ends[t]!);
  if (onsets[0]! < rules.leadIn - slack) broken.push('lead-in');
  if (ends.at(-1)! > rules.lengthSeconds - rules.leadOut + slack) broken.push('lead-out');
  for (const gap of gaps) {
    if (gap < rules.gapMin - slack) broken.push(`gap ${gap}`);
    if (gap > rules.gapMax + slack) broken.push(`gap ${gap}`);
  }
  const mean = gaps.reduce((a, b) => a + b, 0) / gaps.length;
  if (Math.abs(mean - rules.gapMean) > rules.grid / gaps.length + slack) broken.push(`mean ${mean}`);
  rules.counts.forEach((n, k) => {
    if (order.filter((kind) => kind === k).length !== n) broken.push(`count of ${k}`);
  });
  for (const onset of onsets) {
    const index = Math.round(onset / rules.grid);
    if (Math.abs(onset - index * rules.grid) > slack) broken.push(`off the grid ${onset}`);
  }
  let run = 1;
  for (let t = 1; t < order.length; t++) {
    run = order[t] === order[t - 1] ? run + 1 : 1;
    if (run > rules.maxInARow) broken.push('in a row');
  }
  return broken;
}

describe('a candidate never breaks a rule', () => {
  it('for random rules, at every stage of the search', () => {
    const anyRules = fc.record({
      counts: fc.array(fc.integer({ min: 1, max: 6 }), { minLength: 2, maxLength: 4 }),
      lengths: fc.array(fc.integer({ min: 0, max: 25 }), { minLength: 4, maxLength: 4 }),
      grid: fc.constantFrom(0.5, 0.25, 0.18375, 2, 0.7),
      gapMin: fc.integer({ min: 0, max: 15 }),
      wider: fc.integer({ min: 8, max: 60 }),
      share: fc.constantFrom(0, 10, 20, 30, 40, 50, 60, 70, 80, 90, 100),
      maxInARow: fc.constantFrom(1, 2, 3, Infinity),
      leadIn: fc.integer({ min: 0, max: 50 }),
      seed: fc.string({ maxLength: 5 })
    });
    let searched = 0;
    fc.assert(
      fc.property(anyRules, (r) => {
        const rules = rulesWith({
          counts: r.counts,
          // Lengths of tenths of a second on a grid of other steps: gaps then cannot all be grid multiples.
          durations: r.counts.map((_, k) => r.lengths[k]! / 10),
          grid: r.grid,
          gapMin: r.gapMin / 10,
          gapMax: (r.gapMin + r.wider) / 10,
          gapMean: (r.gapMin + Math.round((r.share / 100) * r.wider)) / 10,
          maxInARow: r.maxInARow,
          leadIn: r.leadIn / 10
        });
        const problem = problemWith(rules, {
          contrasts: [r.counts.map(() => 1)],
          modelled: rules.durations.map((duration) => ({ offset: 0.3, duration }))
        });
        let search: Search;
        try {
          search = new Search(problem, r.seed);
        } catch (error) {
          expect(error).toBeInstanceOf(EngineError);
          return;
        }
        searched++;
        for (let i = 0; i < 12; i++) {
          const { order, onsets } = search.underWork();
          expect(brokenRules(rules, order, onsets)).toEqual([]);
          search.step({ iterations: 25 });
        }
        const best = search.best();
        expect(brokenRules(rules, best.order, best.onsets)).toEqual([]);
      }),
      { numRuns: 120, seed: 5 }
    );
    expect(searched).toBeGreaterThan(40);
  }, 60_000);
});

describe('the running sums equal a rebuilt design', () => {
  const cases: [string, SearchProblem][] = [
    ['two kinds, boxcars', problemWith(rulesWith())],
    ['white noise, no high-pass', problemWith(rulesWith(), { noise: { kind: 'white' }, highPass: null })],
    [
      'impulses, unequal lengths',
      problemWith(rulesWith({ durations: [1, 3.5] }), {
        modelled: [
          { offset: 0, duration: 0 },
          { offset: 1, duration: 2 }
        ]
      })
    ],
    [
      'cue and target in columns of their own, TR 0.735 s',
      problemWith(
        rulesWith({
          tr: 0.735,
          volumes: 300,
          lengthSeconds: 220,
          grid: 0.18375,
          counts: [8, 8, 4],
          durations: [3, 3, 2]
        }),
        {
          contrasts: [
            [1, -1, 0, 0],
            [0, 0, 1, -1]
          ],
          modelled: [
            [
              { offset: 0, duration: 0.5, column: 0 },
              { offset: 1.5, duration: 1, column: 2 }
            ],
            [
              { offset: 0, duration: 0.5, column: 1 },
              { offset: 1.5, duration: 1, column: 2 }
            ],
            { offset: 0.2, duration: 1.5, column: 3 }
          ]
        }
      )
    ]
  ];
  it.each(cases)('%s', (_name, problem) => {
    const search = new Search(problem, 'sums');
    for (let i = 0; i < 40; i++) {
      search.step({ iterations: 500 });
      const { order, onsets, score } = search.underWork();
      const rebuilt = scoreEvents(problem, eventsOf(problem, order, onsets)).score;
      expect(score).toBeGreaterThan(0);
      // 1e-9 relative: the aim of the engine's conventions. On this grid no onset is rounded.
      expect(Math.abs(score / rebuilt - 1)).toBeLessThan(1e-9);
    }
  });

  it('and the rebuilt one is the engine’s design report', () => {
    const problem = problemWith(rulesWith());
    const best = new Search(problem, 'report').best();
    const columns = [0, 1].map((kind) => ({
      name: `kind ${kind}`,
      values: regressor(
        best.onsets.filter((_, t) => best.order[t] === kind).map((onset) => ({ onset, duration: 2 })),
        response,
        problem.times,
        peakScale(response, 2)
      )
    }));
    const contrasts = problem.contrasts.map((weights, i) => ({ name: `c${i}`, weights: [...weights] }));
    const report = designReport({
      tr: 2,
      times: problem.times,
      columns,
      contrasts,
      highPass: 128,
      noise: problem.noise
    });
    report.contrasts.forEach((contrast, i) =>
      expect(Math.abs(best.perContrast[i]! / contrast.efficiency - 1)).toBeLessThan(1e-9)
    );
    const harmonic = 3 / report.contrasts.reduce((sum, contrast) => sum + 1 / contrast.efficiency, 0);
    expect(Math.abs(best.score / harmonic - 1)).toBeLessThan(1e-9);
  });
});

describe('the search', () => {
  it('repeats exactly for a seed, however the work is sliced', () => {
    const problem = problemWith(rulesWith());
    const whole = new Search(problem, 's');
    whole.step({ iterations: 45_000 });
    const sliced = new Search(problem, 's');
    for (let done = 0; done < 45_000; done += 750) sliced.step({ iterations: 750 });
    expect(sliced.best()).toEqual(whole.best());
    expect(sliced.progress()).toEqual(whole.progress());
    const other = new Search(problem, 't');
    other.step({ iterations: 45_000 });
    expect(other.best().order).not.toEqual(whole.best().order);
  });

  it('ends a slice by the clock it is given', () => {
    let time = 0;
    const search = new Search(problemWith(rulesWith()), 's', { now: () => (time += 1), presentScore: 3 });
    const progress = search.step({ milliseconds: 10 });
    expect(progress.iterations).toBe(2000);
    expect(progress.presentScore).toBe(3);
  });

  it('finds the best of all designs where all can be tried', () => {
    const rules = rulesWith({
      counts: [2, 2],
      durations: [1, 1],
      grid: 2,
      tr: 2,
      gapMin: 1,
      gapMean: 5,
      gapMax: 9,
      lengthSeconds: 60,
      volumes: 30,
      leadIn: 0,
      maxInARow: 2
    });
    const problem = problemWith(rules, { contrasts: [[1, -1]] });
    let best = 0;
    const steps = [1, 2, 3, 4, 5];
    for (const order of [
      [0, 0, 1, 1],
      [0, 1, 0, 1],
      [0, 1, 1, 0],
      [1, 0, 0, 1],
      [1, 0, 1, 0],
      [1, 1, 0, 0]
    ])
      for (const a of steps)
        for (const b of steps)
          for (const c of steps)
            if (a + b + c === 9) {
              const onsets = [0, a, a + b, a + b + c].map((place) => place * 2);
              expect(brokenRules(rules, order, onsets)).toEqual([]);
              best = Math.max(best, scoreEvents(problem, eventsOf(problem, order, onsets)).score);
            }
    const search = new Search(problem, 'small');
    search.step({ iterations: 20_000 });
    expect(search.best().score).toBeCloseTo(best, 12);
  });

  it('beats random designs by far, and its history only rises', () => {
    const problem = problemWith(rulesWith());
    const search = new Search(problem, 'rise');
    const { history, designs, bestScore } = search.step({ iterations: 60_000 });
    const scores = history.map((point) => point.score);
    expect(scores).toEqual([...scores].sort((a, b) => a - b));
    expect(scores.at(-1)).toBe(bestScore);
    expect(designs).toBeGreaterThan(20_000);
    let random = 0;
    for (let i = 0; i < 60; i++) random = Math.max(random, new Search(problem, `r${i}`).best().score);
    expect(bestScore).toBeGreaterThan(1.2 * random);
  }, 60_000);

  it('scores a run that obeys no rule, and gives 0 where a contrast cannot be estimated', () => {
    const problem = problemWith(rulesWith());
    const loose = scoreEvents(problem, [
      { column: 0, onset: -3.217, duration: 2 },
      { column: 0, onset: 31.0001, duration: 2 },
      { column: 1, onset: 30, duration: 2 },
      { column: 1, onset: 77.7, duration: 9 }
    ]);
    expect(loose.score).toBeGreaterThan(0);
    const empty = scoreEvents(problem, [{ column: 0, onset: 10, duration: 2 }]);
    expect(empty.score).toBe(0);
    expect(empty.perContrast[0]).toBeGreaterThan(0);
    expect(empty.perContrast.slice(1)).toEqual([0, 0]);
  });

  it('scores 10,000 events, and refuses an event that is none', () => {
    const problem = problemWith(rulesWith());
    const events = Array.from({ length: 10_000 }, (_, i) => ({
      column: i % 2,
      onset: (i * 7919) % 200,
      duration: (i % 3) / 10
    }));
    expect(scoreEvents(problem, events).score).toBeGreaterThan(0);
    for (const bad of [{ onset: NaN }, { duration: -1 }, { column: 2 }])
      expect(() => scoreEvents(problem, [{ column: 0, onset: 0, duration: 1, ...bad }])).toThrow(EngineError);
  });

  it('refuses a problem whose lists do not fit', () => {
    const rules = rulesWith();
    const refused = (changes: Partial<SearchProblem>, text: RegExp) =>
      expect(() => new Search(problemWith(rules, changes), 's')).toThrow(text);
    refused({ contrasts: [] }, /at least one contrast/);
    refused({ contrasts: [[1, NaN]] }, /finite number/);
    refused({ contrasts: [[0, 0]] }, /weight other than 0/);
    refused({ modelled: [{ offset: 0, duration: 1 }] }, /one entry per trial kind/);
    refused(
      {
        modelled: [
          { offset: 0, duration: 1 },
          { offset: 0, duration: -1 }
        ]
      },
      /duration of a modelled event/
    );
    refused({ modelled: [{ offset: 0, duration: 1, column: 7 }, []] }, /column of a modelled event/);
    refused({ times: [0, 2] }, /one per volume/);
    expect(() => new Search(problemWith(rulesWith({ grid: 0.001 })), 's')).toThrow(/TR\/4/);
    expect(() => new Search(problemWith(rulesWith({ gapMean: 50, gapMax: 60 })), 's')).toThrow(
      /need .* s; the run has 200 s/
    );
  });
});
