import { describe, expect, it } from 'vitest'
import { ApiProblem, asApiProblem, toApiProblem } from '~/utils/apiProblem'

const body = {
  type: '/problems/wrong-state', title: 'wrong-state', status: 409, code: 'wrong-state', requestId: 'r-1',
  errors: [{ pointer: '/reason', code: 'too-short' }],
}

describe('asApiProblem', () => {
  it('reads what fetch throws', () => {
    expect(asApiProblem({ statusCode: 409, data: body })).toMatchObject({ status: 409, code: 'wrong-state', requestId: 'r-1', errors: body.errors })
  })

  it('leaves a problem as it is', () => {
    const problem = toApiProblem(404, null)
    expect(asApiProblem(problem)).toBe(problem)
  })

  it.each([[new TypeError('fetch failed')], ['text'], [null]])('takes %s for a server that cannot be reached', (failure) => {
    expect(asApiProblem(failure)).toMatchObject({ status: 0, code: 'unreachable', errors: [] })
  })

  it('takes an answer that is no problem document for an internal error', () => {
    expect(asApiProblem({ statusCode: 502, data: '<html>' })).toMatchObject({ status: 502, code: 'internal', requestId: null })
  })

  it.each([['a refusal', 409, body], ['silence', 0, null]])('survives a payload that keeps status and data only: %s', (_name, status, given) => {
    const problem = toApiProblem(status, given)
    const revived: unknown = JSON.parse(JSON.stringify({ statusCode: problem.statusCode || 500, data: problem.data }))
    expect(asApiProblem(revived)).toMatchObject({ code: problem.code, errors: problem.errors, requestId: problem.requestId })
  })

  it('is an Error, so that a handler of errors sees it', () => {
    expect(toApiProblem(500, null)).toBeInstanceOf(ApiProblem)
    expect(toApiProblem(500, null)).toBeInstanceOf(Error)
  })
})
