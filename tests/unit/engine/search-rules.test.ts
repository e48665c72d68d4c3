import { describe, expect, it } from 'vitest';
import { EngineError } from '$lib/engine/errors';
import { checkRules, type SearchRules } from '$lib/engine/search';

function rulesWith(changes: Partial<SearchRules> = {}): SearchRules {
  return {
    lengthSeconds: 600,
    volumes: 300,
    tr: 2,
    grid: 0.5,
    counts: [60, 60],
    durations: [3, 3],
    gapMin: 1,
    gapMean: 6,
    gapMax: 12,
    maxInARow: 4,
    leadIn: 0,
    leadOut: 0,
    ...changes
  };
}
const problemsOf = (changes: Partial<SearchRules>) => {
  const check = checkRules(rulesWith(changes));
  return check.ok ? [] : check.problems;
};

describe('checkRules', () => {
  it('names the clashing rules with their numbers and the nearest possible values', () => {
    const [problem, ...others] = problemsOf({});
    expect(others).toEqual([]);
    expect(problem).toContain(
      '120 trials of 3 s with a mean gap of 6 s (end to onset) need 1,080 s; the run has 600 s.'
    );
    expect(problem).toContain('a mean gap of at most 2 s, or 66 trials, or a run of 540 volumes (1,080 s)');
  });

  it('gives values that then really work', () => {
    expect(problemsOf({ gapMean: 2 })).toEqual([]);
    expect(problemsOf({ counts: [33, 33] })).toEqual([]);
    expect(problemsOf({ volumes: 540, lengthSeconds: 1080 })).toEqual([]);
    const tight = { leadIn: 7.3, leadOut: 16, durations: [2.5, 3.1] };
    const text = problemsOf(tight)[0]!;
    const mean = Number(/mean gap of at most ([\d.]+) s/.exec(text)![1]);
    expect(problemsOf({ ...tight, gapMean: mean })).toEqual([]);
    expect(problemsOf({ ...tight, gapMean: mean + 0.01 })).toHaveLength(1);
    const volumes = Number(/a run of (\d+) volumes/.exec(text)![1]);
    expect(problemsOf({ ...tight, volumes, lengthSeconds: volumes * 2 })).toEqual([]);
    expect(problemsOf({ ...tight, volumes: volumes - 1, lengthSeconds: volumes * 2 - 2 })).toHaveLength(1);
  });

  it('counts lead-in and lead-out', () => {
    expect(problemsOf({ leadIn: 10, leadOut: 12 })[0]).toContain(
      'with a mean gap of 6 s (end to onset), a lead-in of 10 s and a lead-out of 12 s need 1,096 s'
    );
  });

  it('knows a run that is longer than its volumes', () => {
    expect(problemsOf({ gapMean: 1.5, lengthSeconds: 610 })).toEqual([
      'The run is to last 610 s, but 300 volumes at a TR of 2 s end at 600 s. The nearest possible length is 600 s, or use 305 volumes.'
    ]);
  });

  it('knows a mean gap outside its bounds', () => {
    expect(problemsOf({ gapMean: 0.5 })).toEqual([
      'The mean gap of 0.5 s is not between the smallest gap (1 s) and the largest gap (12 s). The nearest possible mean is 1 s.'
    ]);
    expect(problemsOf({ gapMin: 5, gapMean: 1, gapMax: 3 })).toEqual([
      'The smallest gap (5 s) is above the largest gap (3 s).'
    ]);
  });

  it('knows what the grid forbids', () => {
    expect(problemsOf({ counts: [20, 20], durations: [2.3, 2.3], gapMin: 3, gapMean: 3, gapMax: 3 })).toEqual(
      [
        'After a trial of 2.3 s no gap from 3 s to 3 s reaches the onset grid of 0.5 s. The nearest possible gap is 2.7 s or 3.2 s.'
      ]
    );
    const text = problemsOf({ counts: [20, 20], durations: [2.3, 2.3], gapMin: 3, gapMean: 3, gapMax: 6 });
    expect(text).toHaveLength(1);
    expect(text[0]).toContain('The nearest possible mean is 3.2 s.');
    expect(
      problemsOf({ counts: [20, 20], durations: [2.3, 2.3], gapMin: 3, gapMean: 3.2, gapMax: 6 })
    ).toEqual([]);
  });

  it('knows too many of one kind for the limit in a row', () => {
    expect(problemsOf({ counts: [30, 5], gapMean: 2, maxInARow: 4 })).toEqual([
      '30 trials of kind 1 with only 5 others between them cannot keep to at most 4 in a row. The nearest possible limit is 5 in a row, or at most 24 trials of this kind.'
    ]);
    expect(problemsOf({ counts: [24, 5], gapMean: 2, maxInARow: 4 })).toEqual([]);
    expect(problemsOf({ counts: [30, 5], gapMean: 2, maxInARow: 5 })).toEqual([]);
  });

  it('wants at least two trials', () => {
    expect(problemsOf({ counts: [1, 0] })).toEqual([
      'The rules ask for 1 trial in all; a search needs at least 2.'
    ]);
  });

  it('refuses values that are no rules, with value, expectation and way out', () => {
    const bad: Partial<SearchRules>[] = [
      { lengthSeconds: 0 },
      { tr: -2 },
      { grid: NaN },
      { volumes: 0 },
      { counts: [1.5, 2] },
      { counts: [3] },
      { counts: [], durations: [] },
      { durations: [1, -1] },
      { gapMin: -1 },
      { gapMax: Infinity },
      { maxInARow: 0 },
      { leadIn: -1 },
      { leadOut: NaN }
    ];
    for (const changes of bad) {
      expect(() => checkRules(rulesWith(changes))).toThrow(EngineError);
      expect(() => checkRules(rulesWith(changes))).toThrow(/ is .*; expected .*\. .*\./);
    }
  });
});
