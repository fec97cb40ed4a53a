import { describe, expect, it } from 'vitest'
import { readNumber } from '../../../../server/readers/numbers'

describe('readNumber', () => {
  it.each([
    ['12', 12], ['-0.5', -0.5], ['+3', 3], ['.25', 0.25], ['7.', 7], ['1e-3', 0.001], ['2.5E+2', 250], ['  12  ', 12], ['0', 0], ['0e5', 0],
    ['0.1', 0.1], ['12345678.12345678', 12345678.12345678],
  ])('reads %j', (text, value) => {
    expect(readNumber(text)).toEqual({ kind: 'number', value })
  })

  it.each(['', '   '])('takes %j as missing', (text) => {
    expect(readNumber(text)).toEqual({ kind: 'missing' })
  })

  it.each([
    ['12,5', 'decimal-comma'], ['-0,25', 'decimal-comma'], ['1,000', 'decimal-comma'],
    ['1 000', 'thousands'], ['1\u00A0000', 'thousands'], ['1\u202F000,5', 'thousands'], ['1,000.5', 'thousands'], ['1.000,5', 'thousands'],
    ['1.000.000', 'thousands'], ['1,000,000', 'thousands'],
    ['<5', 'censored'], ['>200', 'censored'], ['≤ 0.3', 'censored'],
    ['\u22125', 'minus-sign'], ['–5', 'minus-sign'],
    ['١٢', 'foreign-digits'], ['１２', 'foreign-digits'],
    ['(4)', 'parentheses'], ['12 %', 'percent'],
    ['.', 'missing-code'], ['.A', 'missing-code'], ['NA', 'missing-code'], ['n/a', 'missing-code'], ['NaN', 'missing-code'],
    ['1e400', 'out-of-range'], ['-1e400', 'out-of-range'], ['1e-400', 'out-of-range'],
    ['3-', 'other'], ['HEMOLYZED', 'other'], ['0x10', 'other'], ['Infinity', 'other'], ['1e', 'other'], ['1_000', 'other'], ['\t12', 'other'],
  ])('refuses %j as %s', (text, looks) => {
    expect(readNumber(text)).toEqual({ kind: 'not-a-number', looks })
  })
})
