/** Counts what the runners report. Anything that is not a plain pass counts as failed. */

/**
 * @param report JSON of `vitest --reporter=json`, or null when none was written
 * @param {number} code exit code of the runner
 */
export function countVitest(report, code) {
  if (!report) return { passed: 0, failed: 1 };
  const passed = report.numPassedTests ?? 0;
  const other = (report.numTotalTests ?? 0) - passed;
  // A file that does not load has no tests to count.
  const broken = (report.testResults ?? []).filter(
    (file) => file.status === 'failed' && !file.assertionResults.length
  );
  return atLeastOne({ passed, failed: other + broken.length }, code);
}

/** @param report JSON of `playwright --reporter=json`, or null when none was written */
export function countPlaywright(report, code) {
  if (!report) return { passed: 0, failed: 1 };
  const { expected = 0, unexpected = 0, flaky = 0, skipped = 0 } = report.stats ?? {};
  return atLeastOne({ passed: expected, failed: unexpected + flaky + skipped }, code);
}

/** A runner that ended badly without a failed test (a server that did not start) still failed. */
const atLeastOne = (count, code) => (code !== 0 && count.failed === 0 ? { ...count, failed: 1 } : count);
