import { existsSync, readFileSync } from 'node:fs';

/** Counts of one kind of test, from the runners' JSON reports. */
export function vitestTally(file) {
  if (!existsSync(file)) return { passed: 0, failed: 1, skipped: 0 };
  const report = JSON.parse(readFileSync(file, 'utf8'));
  // A file that fails to load has no tests in it, but is a failure all the same.
  const broken = report.testResults.filter(
    (suite) => suite.status === 'failed' && suite.assertionResults.length === 0,
  ).length;
  return {
    passed: report.numPassedTests,
    failed: report.numFailedTests + broken,
    skipped: report.numPendingTests + report.numTodoTests,
  };
}

export function playwrightTally(file) {
  if (!existsSync(file)) return { passed: 0, failed: 1, skipped: 0 };
  const { stats, errors } = JSON.parse(readFileSync(file, 'utf8'));
  return {
    passed: stats.expected + stats.flaky,
    failed: stats.unexpected + errors.length,
    skipped: stats.skipped,
  };
}
