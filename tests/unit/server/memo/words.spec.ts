import { describe, expect, it } from 'vitest'
import { count, decimal, grouped, measured, momentWords, pValue } from '../../../../server/memo/words'

describe('figures in print', () => {
  it('writes a true minus, and none before a figure that rounds to zero', () => {
    expect(decimal(-1.2345, 2)).toBe('\u22121.23')
    expect(decimal(-0.004, 2)).toBe('0.00')
  })

  it.each([[0.0342, 'p = 0.034'], [0.00099, 'p < 0.001'], [0.001, 'p = 0.001'], [1, 'p = 1.000']])('writes %d as %s', (p, expected) => {
    expect(pValue(p)).toBe(expected)
  })

  it('writes shares as percentages and counts without decimals', () => {
    expect(measured('share-missing', 0.0347)).toBe('3.5 %')
    expect(measured('count', 48)).toBe('48')
  })

  it('groups thousands by a narrow space', () => {
    expect(count(1152)).toBe('1\u202F152')
    expect(count(152)).toBe('152')
  })
})

describe('moments and hashes in print', () => {
  it('names the day in words and the zone beside the time', () => {
    const say = (key: string) => key
    expect(momentWords('2026-06-12T09:14:05.123Z', say)).toBe('12 memo.month.6 2026, 09:14:05 UTC')
  })

  it('loses no digit of a hash', () => {
    const hash = 'b2a5c1d4e7f80912a3b4c5d6e7f8091a2b3c4d5e6f708192a3b4c5d6e7f80911'
    expect(grouped(hash).replaceAll(' ', '')).toBe(hash)
  })
})
