import { describe, expect, it } from 'vitest'
import { defineOperation } from '#shared/contract/operation'
import { fieldPath } from '~/utils/fieldPath'
import { operationPath } from '~/utils/operationPath'
import { wordedParams } from '~/utils/wordedParams'

describe('fieldPath', () => {
  it.each([
    ['/reason', 'reason'], ['/analyses/0/label', 'analyses[0].label'], ['/flags/A~1B~0C', 'flags.A/B~C'], ['', ''],
  ])('%s is the field %s', (pointer, path) => {
    expect(fieldPath(pointer)).toBe(path)
  })
})

describe('operationPath', () => {
  const operation = defineOperation({
    id: 'trial', method: 'GET', path: '/api/studies/[studyId]/verdicts/[analysis]', action: 'verdict.read', scope: 'study',
    params: null, query: null, body: null, answer: null, errors: [], example: {},
  })

  it('fills in every parameter and escapes it', () => {
    expect(operationPath(operation, { studyId: 's1', analysis: 'A/B ?' })).toBe('/api/studies/s1/verdicts/A%2FB%20%3F')
  })
})

describe('wordedParams', () => {
  it('puts lists in one line and leaves figures as they are', () => {
    expect(wordedParams({ options: ['a', 'b'], minimum: 3 })).toEqual({ options: 'a, b', minimum: 3 })
    expect(wordedParams()).toEqual({})
  })
})
