import { describe, expect, it } from 'vitest';
import { countPlaywright, countVitest } from '../../../scripts/test-counts.mjs';

describe('counting the reports of the runners', () => {
  it('counts passes, failures, skipped tests and files that did not load', () => {
    const file = (status: string, tests: number) => ({ status, assertionResults: Array(tests).fill({}) });
    const report = {
      numTotalTests: 6,
      numPassedTests: 4,
      testResults: [file('passed', 6), file('failed', 0)]
    };
    expect(countVitest(report, 1)).toEqual({ passed: 4, failed: 3 });
    expect(countPlaywright({ stats: { expected: 5, unexpected: 1, flaky: 1, skipped: 2 } }, 1)).toEqual({
      passed: 5,
      failed: 4
    });
  });

  it('never turns a bad end into a pass', () => {
    expect(countVitest(null, 0)).toEqual({ passed: 0, failed: 1 });
    expect(countPlaywright(null, 0)).toEqual({ passed: 0, failed: 1 });
    expect(countVitest({ numTotalTests: 2, numPassedTests: 2, testResults: [] }, 1)).toEqual({
      passed: 2,
      failed: 1
    });
    expect(countPlaywright({ stats: { expected: 3 } }, 1)).toEqual({ passed: 3, failed: 1 });
  });

  it('counts a clean end as it is', () => {
    expect(countVitest({ numTotalTests: 2, numPassedTests: 2, testResults: [] }, 0)).toEqual({
      passed: 2,
      failed: 0
    });
    expect(countPlaywright({ stats: { expected: 3 } }, 0)).toEqual({ passed: 3, failed: 0 });
  });
});
