/**
 * Counts from the reports of the test runners. A runner that ends badly is never counted as all passed: where its report
 * is missing, or shows no failure, one failure is counted for it.
 *
 * @typedef {{ passed: number, failed: number, skipped: number }} Counts
 */

/**
 * @param {any} report  vitest's JSON report, or undefined where none was written
 * @param {boolean} ok  did the runner end with code 0
 * @returns {Counts}
 */
export function countVitest(report, ok) {
  if (!report) return withRunner({ passed: 0, failed: 0, skipped: 0 }, false)
  const passed = report.numPassedTests
  const skipped = report.numPendingTests + report.numTodoTests
  // a file that could not be loaded has no tests to count
  const broken = report.testResults.filter(
    (file) => file.status === 'failed' && file.assertionResults.length === 0,
  ).length
  return withRunner({ passed, failed: report.numFailedTests + broken, skipped }, ok)
}

/**
 * A journey that passed only when it was repeated counts as passed.
 *
 * @param {any} report  Playwright's JSON report, or undefined where none was written
 * @param {boolean} ok  did the runner end with code 0
 * @returns {Counts}
 */
export function countPlaywright(report, ok) {
  if (!report) return withRunner({ passed: 0, failed: 0, skipped: 0 }, false)
  const { expected, unexpected, flaky, skipped } = report.stats
  return withRunner({ passed: expected + flaky, failed: unexpected, skipped }, ok)
}

function withRunner(counts, ok) {
  const nothing = counts.passed + counts.failed + counts.skipped === 0
  return counts.failed === 0 && (!ok || nothing) ? { ...counts, failed: 1 } : counts
}

/**
 * @param {readonly Counts[]} list
 * @returns {Counts}
 */
export function sum(list) {
  const add = (key) => list.reduce((total, counts) => total + counts[key], 0)
  return { passed: add('passed'), failed: add('failed'), skipped: add('skipped') }
}

/**
 * @param {Counts} counts
 * @returns {string}  `12 passed, 0 failed`, and `, 1 skipped` where some were
 */
export function lastLine({ passed, failed, skipped }) {
  return `${passed} passed, ${failed} failed${skipped > 0 ? `, ${skipped} skipped` : ''}`
}
