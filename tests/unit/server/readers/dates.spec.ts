import { describe, expect, it } from 'vitest'
import { readDate } from '../../../../server/readers/dates'

describe('readDate', () => {
  it.each(['2026-03-31', '2024-02-29', '2000-02-29', '2026-03', '2026', '2026-03-31T10:00'])('reads %s', (text) => {
    expect(readDate(text)).toEqual({ kind: 'date', text: text.slice(0, 10) })
  })

  it.each(['2026-02-29', '1900-02-29', '2026-13-01', '2026-00-10', '2026-04-31', '2026-04-00', '2026-13'])('finds %s impossible', (text) => {
    expect(readDate(text)).toEqual({ kind: 'impossible' })
  })

  it.each(['31.03.2026', '03/04/2026', '12MAR2026', '46112'])('does not guess at %s', (text) => {
    expect(readDate(text)).toEqual({ kind: 'other-notation' })
  })

  it('takes an empty cell as missing', () => {
    expect(readDate(' ')).toEqual({ kind: 'missing' })
  })
})
