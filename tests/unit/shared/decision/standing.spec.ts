import { describe, expect, it } from 'vitest'
import { type EarlierExtract, standing, subjectsExpected } from '#shared/decision/standing'
import { plainPlan } from '../../../helpers/plainPlan'

const at = (cutOff: string, earlier: EarlierExtract[] = []) => standing(plainPlan, earlier, cutOff, 'interim')

describe('standing', () => {
  it.each([
    ['2026-02-23', 'unscheduled', null],
    ['2026-02-24', 'look', 'L1'],
    ['2026-03-08', 'look', 'L1'],
    ['2026-03-09', 'unscheduled', null],
    ['2026-06-01', 'look', 'L2'],
  ])('%s is %s', (cutOff, word, look) => {
    expect(at(cutOff)).toEqual({ standing: word, look })
  })

  it('makes the second extract in a window a re-cut, whatever else came before', () => {
    const first: EarlierExtract = { standing: 'look', look: 'L1' }
    expect(at('2026-03-02', [first])).toEqual({ standing: 're-cut', look: 'L1' })
    expect(at('2026-06-02', [first])).toEqual({ standing: 'look', look: 'L2' })
    expect(at('2026-03-02', [{ standing: 'unscheduled', look: null }, { standing: 'look', look: 'L2' }])).toEqual({ standing: 'look', look: 'L1' })
  })

  it('takes the locked database as the decision point whatever its date', () => {
    expect(standing(plainPlan, [], '2026-03-01', 'database-lock')).toEqual({ standing: 'decision-point', look: null })
  })
})

describe('subjectsExpected', () => {
  const expected = (cutOff: string | null, look: string | null = null, purpose: 'interim' | 'database-lock' = 'interim') => subjectsExpected(plainPlan, { cutOff, look, purpose })

  it('is that of the look, of the decision point, or of the last look whose date has passed', () => {
    expect(expected('2026-06-03', 'L2')).toBe(80)
    expect(expected('2026-06-03')).toBe(80)
    expect(expected('2026-06-03', null, 'database-lock')).toBe(120)
    expect(expected('2026-04-15')).toBe(40)
    expect(expected('2027-01-01')).toBe(80)
    expect(expected('2025-01-01')).toBe(40)
    expect(expected(null)).toBe(120)
  })
})
