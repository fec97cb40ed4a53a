// @ts-check
import { existsSync, readFileSync } from 'node:fs'

/**
 * @typedef {{ passed: number, failed: number, skipped: number }} Count
 */

/** @param {readonly Count[]} counts @returns {Count} */
export const total = counts => counts.reduce((sum, { passed, failed, skipped }) => ({
  passed: sum.passed + passed, failed: sum.failed + failed, skipped: sum.skipped + skipped,
}), { passed: 0, failed: 0, skipped: 0 })

/** @param {Count} count */
export const closingLine = ({ passed, failed, skipped }) => `${passed} passed, ${failed} failed${skipped > 0 ? `, ${skipped} skipped` : ''}`

/**
 * Reads vitest's JSON report. A file that could not be loaded counts as one failure, as does a run without any
 * test: neither may pass for success.
 *
 * @param {string} file
 * @param {number} exitCode
 * @returns {Count}
 */
export function vitestCount(file, exitCode) {
  if (!existsSync(file)) return { passed: 0, failed: 1, skipped: 0 }
  const report = JSON.parse(readFileSync(file, 'utf8'))
  const skipped = report.numPendingTests + (report.numTodoTests ?? 0)
  const unloaded = report.testResults.filter((/** @type {{ status: string, assertionResults: unknown[] }} */ { status, assertionResults }) => status === 'failed' && assertionResults.length === 0).length
  const failed = report.numFailedTests + unloaded
  const silent = report.numPassedTests + failed === 0 || (exitCode !== 0 && failed === 0)
  return { passed: report.numPassedTests, failed: failed + (silent ? 1 : 0), skipped }
}

/**
 * The last closing line of a run's output, read back.
 *
 * @param {string} text
 * @returns {Count | null}
 */
export function readClosingLine(text) {
  const [found] = [...text.matchAll(/^(\d+) passed, (\d+) failed(?:, (\d+) skipped)?$/gm)].slice(-1)
  return found ? { passed: Number(found[1]), failed: Number(found[2]), skipped: Number(found[3] ?? 0) } : null
}
