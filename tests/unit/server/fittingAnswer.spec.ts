import { describe, expect, it } from 'vitest'
import { z } from 'zod'
import { momentText } from '#shared/contract/parts'
import { fittingAnswer } from '../../../server/utils/fittingAnswer'

const answer = z.strictObject({ at: momentText, figure: z.number() })
const fit = (given: unknown) => fittingAnswer({ id: 'test.read', answer }, given)

describe('fittingAnswer', () => {
  it('sends moments as ISO 8601 in UTC with milliseconds', () => {
    expect(fit({ at: new Date(Date.UTC(2026, 5, 12, 9, 14)), figure: 0.1 })).toEqual({ at: '2026-06-12T09:14:00.000Z', figure: 0.1 })
  })

  it.each([
    ['a field that the contract does not name', { at: new Date(0), figure: 1, arm: 'A' }],
    ['a field left out', { at: new Date(0) }],
    ['a figure that is none', { at: new Date(0), figure: 'x' }],
    ['an infinite figure', { at: new Date(0), figure: Infinity }],
    ['nothing', undefined],
  ])('never sends %s', (_, given) => {
    expect(() => fit(given)).toThrow(expect.objectContaining({ code: 'internal' }))
  })

  it('answers nothing where nothing is declared, whatever was returned', () => {
    expect(fittingAnswer({ id: 'test.do', answer: null }, { secret: 1 })).toBeNull()
  })

  it('passes files on', () => {
    const bytes = Buffer.from('%PDF')
    expect(fittingAnswer({ id: 'test.file', answer: { media: 'file', types: ['application/pdf'] } }, bytes)).toBe(bytes)
  })
})
