// @ts-check

/**
 * @typedef {{ passed: number, failed: number, skipped: number }} Count
 * @typedef {{ name: string, seconds: number, count: Count }} Done a stage that has been run.
 * @typedef {object} VitestReport as much of vitest's JSON report as is read.
 * @property {number} numPassedTests
 * @property {number} numFailedTests
 * @property {number} numPendingTests
 * @property {number} [numTodoTests]
 * @property {readonly { status: string, assertionResults: readonly { status: string }[] }[]} testResults by file.
 */

/** A check that is no collection of tests counts as one. */
export const ONE_PASSED = { passed: 1, failed: 0, skipped: 0 }
export const ONE_FAILED = { passed: 0, failed: 1, skipped: 0 }

/** @param {readonly Count[]} counts @returns {Count} */
export const total = counts => counts.reduce((sum, { passed, failed, skipped }) => ({
  passed: sum.passed + passed, failed: sum.failed + failed, skipped: sum.skipped + skipped,
}), { passed: 0, failed: 0, skipped: 0 })

/** @param {Count} count */
export const closingLine = ({ passed, failed, skipped }) => `${passed} passed, ${failed} failed${skipped > 0 ? `, ${skipped} skipped` : ''}`

/**
 * Counts a run of vitest. A file that fails as a whole counts as one failure, as does a run that ends badly, that
 * leaves no report or in which no test was run: none of these may pass for success.
 *
 * @param {VitestReport | null} report
 * @param {number} exitCode
 * @returns {Count}
 */
export function countVitest(report, exitCode) {
  if (!report) return ONE_FAILED
  const brokenFiles = report.testResults.filter(({ status, assertionResults }) =>
    status === 'failed' && !assertionResults.some(({ status }) => status === 'failed')).length
  const failed = report.numFailedTests + brokenFiles
  const bad = failed === 0 && (exitCode !== 0 || report.numPassedTests === 0)
  return { passed: report.numPassedTests, failed: failed + Number(bad), skipped: report.numPendingTests + (report.numTodoTests ?? 0) }
}

/**
 * One line per stage, in columns.
 *
 * @param {readonly Done[]} stages
 */
export function table(stages) {
  const width = Math.max(...stages.map(({ name }) => name.length))
  return stages.map(({ name, seconds, count }) => `${name.padEnd(width)}  ${seconds.toFixed(1).padStart(7)} s  ${closingLine(count)}`).join('\n')
}
