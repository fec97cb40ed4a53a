import { createError } from 'h3'
import { describe, expect, it } from 'vitest'
import { PROBLEMS } from '#shared/contract/problems'
import { isDatabaseUnavailable, violatesUnique } from '../../../server/database/failures'
import { DomainError } from '../../../server/domainError'
import { errorFacts } from '../../../server/log'
import { problemOf } from '../../../server/problem'

const coded = (code: string, more = {}) => Object.assign(new Error('secret of the database: select * from person'), { code, ...more })
const wrapped = (cause: Error) => new Error('Failed query: select * from person', { cause })

describe('problemOf', () => {
  it('answers every code with its status and a text of its own', () => {
    const titles = Object.entries(PROBLEMS).map(([code, status]) => {
      const { body } = problemOf(new DomainError(code as keyof typeof PROBLEMS), 'r')
      expect(body).toMatchObject({ code, status, type: `/problems/${code}`, requestId: 'r', errors: [] })
      return body.title
    })
    expect(new Set(titles).size).toBe(titles.length)
    expect(titles.every(title => title.length > 10)).toBe(true)
  })

  it('passes findings and the time to wait on', () => {
    const error = new DomainError('too-many-attempts', [{ pointer: '/a', code: 'required' }], { retryAfter: 7 })
    expect(problemOf(error, 'r')).toMatchObject({ retryAfter: 7, unforeseen: false, body: { errors: [{ pointer: '/a', code: 'required' }] } })
  })

  it.each(['ECONNREFUSED', 'CONNECTION_CLOSED', 'CONNECT_TIMEOUT', '57P01', '57P03', '08006', '53300'])('reads %s as a database that is away', (code) => {
    expect(isDatabaseUnavailable(wrapped(coded(code)))).toBe(true)
    expect(problemOf(wrapped(coded(code)), 'r')).toMatchObject({ retryAfter: 5, unforeseen: false, body: { status: 503, code: 'database-unavailable' } })
  })

  it('gives away nothing of a foreign error', () => {
    const answer = problemOf(wrapped(coded('42P01')), 'r')
    expect(answer).toMatchObject({ unforeseen: true, body: { status: 500, code: 'internal', errors: [] } })
    expect(JSON.stringify(answer)).not.toMatch(/select|secret/)
  })

  it('translates what h3 itself refuses, and finds our error inside its wrapping', () => {
    expect(problemOf(createError({ statusCode: 404 }), 'r').body.code).toBe('not-found')
    expect(problemOf(createError({ statusCode: 418 }), 'r').body.code).toBe('internal')
    expect(problemOf(createError(new DomainError('foreign-origin')), 'r').body).toMatchObject({ status: 403, code: 'foreign-origin' })
  })
})

describe('errorFacts', () => {
  it('keeps kind, code and place of an error, not its text', () => {
    const facts = errorFacts(wrapped(coded('23505')))
    expect(facts).toMatchObject({ kind: 'Error', code: '23505' })
    expect(JSON.stringify(facts)).not.toMatch(/select|secret/)
    expect(JSON.stringify(facts)).toContain('problem.spec')
  })
})

describe('violatesUnique', () => {
  it('asks for the constraint by name', () => {
    const error = wrapped(coded('23505', { constraint_name: 'person_email_unique' }))
    expect(violatesUnique(error, 'person_email_unique')).toBe(true)
    expect(violatesUnique(error, 'study_protocol_number_unique')).toBe(false)
    expect(violatesUnique(wrapped(coded('23503', { constraint_name: 'person_email_unique' })), 'person_email_unique')).toBe(false)
  })
})
