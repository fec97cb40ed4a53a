import { describe, expect, it } from 'vitest'
import { formatBytes, formatDate, formatFigure, formatMoment, formatPValue, formatShare } from '~/utils/format'

describe('formatPValue', () => {
  it.each([
    [0.034, 'p = 0.034'], [0.001, 'p = 0.001'], [0.0009999, 'p < 0.001'], [0, 'p < 0.001'], [4.7e-18, 'p < 0.001'],
    [0.5, 'p = 0.500'], [0.999, 'p = 0.999'], [0.9996, 'p > 0.999'], [1, 'p > 0.999'],
  ])('%d reads %s', (p, text) => {
    expect(formatPValue(p)).toBe(text)
  })
})

describe('formatFigure', () => {
  it.each([
    [-1.2044, 3, '\u22121.204'], [0, 3, '0.000'], [-0, 2, '0.00'], [12, 0, '12'], [1234567, 1, '1234567.0'],
    [0.0005, 3, '0.001'], [0.0000312, 3, '3.12 × 10⁻⁵'], [-0.0000312, 3, '\u22123.12 × 10⁻⁵'],
    [1e7, 3, '1.00 × 10⁷'], [0.2, 0, '2 × 10⁻¹'],
  ])('%d with %d decimals reads %s', (value, decimals, text) => {
    expect(formatFigure(value, decimals)).toBe(text)
  })
})

describe('formatShare', () => {
  it('gives one decimal and a unit', () => {
    expect(formatShare(0.153)).toBe('15.3\u202f%')
    expect(formatShare(1)).toBe('100.0\u202f%')
  })
})

describe('dates and moments', () => {
  it('reads a date without a time zone', () => {
    expect(formatDate('2026-06-02')).toBe('02 Jun 2026')
    expect(formatDate('2025-12-31')).toBe('31 Dec 2025')
  })

  it('reads a moment in UTC whatever the machine is set to', () => {
    expect(formatMoment('2026-06-12T09:14:59.999Z')).toBe('12 Jun 2026, 09:14 UTC')
  })
})

describe('formatBytes', () => {
  it.each([[0, '0\u202fB'], [999, '999\u202fB'], [1000, '1.0\u202fkB'], [52_428_800, '52.4\u202fMB'], [3e12, '3000.0\u202fGB']])('%d bytes read %s', (bytes, text) => {
    expect(formatBytes(bytes)).toBe(text)
  })
})
