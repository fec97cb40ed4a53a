import { describe, expect, it } from 'vitest'
import type { Finding } from '#shared/contract/extracts'
import type { ScreenFinding } from '#shared/decision/screen'
import { FINDINGS_KEPT } from '../../../../server/readers/findings'
import { mergeScreens } from '../../../../server/services/screenFindings'

const mapping = {
  subject: ['USUBJID'], parameter: 'PARAMCD', visit: 'AVISIT', value: 'AVAL', baseline: null, unit: 'AVALU', site: null, imputed: null, arm: null, flags: {},
}
const screen = (changes: Partial<ScreenFinding>): ScreenFinding =>
  ({ screen: 'S1', kind: 'impossible-value', action: 'hold', endpoint: 'PAIN', rows: [7], count: 1, clearable: true, ...changes })
const warning: Finding = { severity: 'warn', code: 'formula', row: 3, column: 'USUBJID', params: {} }

describe('mergeScreens', () => {
  it('puts what holds before what warns, each by row, at the column in which the screen looks', () => {
    const screens = [
      screen({ kind: 'implausible-value', action: 'warn', rows: [2] }), screen({ kind: 'wrong-unit', rows: [9] }),
      screen({ kind: 'unknown-visit', rows: [8] }), screen({ kind: 'duplicate-key', rows: [4, 5], count: 2 }),
    ]
    const { findings, findingCounts } = mergeScreens({ mapping, findings: [warning], findingCounts: { refuse: 0, hold: 0, warn: 1 } }, screens)
    expect(findings.map(({ code, row, column }) => [code, row, column])).toEqual([
      ['duplicate-key', 4, 'USUBJID'], ['duplicate-key', 5, 'USUBJID'], ['unknown-visit', 8, 'AVISIT'], ['wrong-unit', 9, 'AVALU'],
      ['implausible-value', 2, 'AVAL'], ['formula', 3, 'USUBJID'],
    ])
    expect(findingCounts).toEqual({ refuse: 0, hold: 4, warn: 2 })
  })

  it('counts every row a screen touches, and keeps no more findings than are shown', () => {
    const rows = Array.from({ length: 200 }, (_, index) => index + 2)
    const screens = [screen({ rows, count: 5000 }), screen({ rows, count: 200, endpoint: 'CRP' }), screen({ rows, count: 200, endpoint: 'ALT' })]
    const { findings, findingCounts } = mergeScreens({ mapping, findings: [warning], findingCounts: { refuse: 0, hold: 0, warn: 1 } }, screens)
    expect(findingCounts).toEqual({ refuse: 0, hold: 5400, warn: 1 })
    expect(findings).toHaveLength(FINDINGS_KEPT)
    expect(findings.every(({ severity }) => severity === 'hold')).toBe(true)
  })
})
