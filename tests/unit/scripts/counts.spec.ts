import { describe, expect, it } from 'vitest'
import { closingLine, countVitest, table, total } from '../../../scripts/counts.mjs'

const file = (status: string, ...tests: string[]) => ({ status, assertionResults: tests.map(status => ({ status })) })
const report = (counts: { passed?: number, failed?: number, pending?: number, todo?: number }, testResults: ReturnType<typeof file>[] = []) => ({
  numPassedTests: counts.passed ?? 0, numFailedTests: counts.failed ?? 0, numPendingTests: counts.pending ?? 0, numTodoTests: counts.todo ?? 0, testResults,
})

describe('countVitest', () => {
  it('counts tests by what became of them', () => {
    expect(countVitest(report({ passed: 5, failed: 2, pending: 1, todo: 3 }, [file('failed', 'passed', 'failed')]), 1)).toEqual({ passed: 5, failed: 2, skipped: 4 })
  })

  it.each([
    ['a run without a report', null, 0],
    ['a run in which no test was run', report({ pending: 4 }), 0],
    ['a run that ends badly although every test passed', report({ passed: 9 }, [file('passed', 'passed')]), 1],
    ['a file that cannot be loaded', report({ passed: 1 }, [file('passed', 'passed'), file('failed')]), 1],
    ['a file that fails after its tests have passed', report({ passed: 1 }, [file('failed', 'passed')]), 1],
  ])('takes %s for one failure', (_, given, exitCode) => {
    expect(countVitest(given, exitCode).failed).toBe(1)
  })

  it('does not count a file again whose tests have failed', () => {
    expect(countVitest(report({ failed: 1 }, [file('failed', 'failed')]), 1).failed).toBe(1)
  })
})

describe('the closing line', () => {
  it('adds up, and speaks of skipped tests only where there are any', () => {
    const sum = total([{ passed: 2, failed: 0, skipped: 0 }, { passed: 1, failed: 3, skipped: 0 }])
    expect(closingLine(sum)).toBe('3 passed, 3 failed')
    expect(closingLine(total([sum, { passed: 0, failed: 0, skipped: 2 }]))).toBe('3 passed, 3 failed, 2 skipped')
    expect(closingLine(total([]))).toBe('0 passed, 0 failed')
  })

  it('stands in columns per stage', () => {
    expect(table([
      { name: 'lint', seconds: 4.04, count: { passed: 1, failed: 0, skipped: 0 } },
      { name: 'component', seconds: 120, count: { passed: 7, failed: 1, skipped: 1 } },
    ])).toBe('lint           4.0 s  1 passed, 0 failed\ncomponent    120.0 s  7 passed, 1 failed, 1 skipped')
  })
})
