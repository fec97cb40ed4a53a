import { describe, expect, it } from 'vitest'
import { z } from 'zod'
import { findingsOf, pointerTo } from '#shared/schemas/findings'
import { emailAddress, lineText, newPassword } from '#shared/schemas/text'

const findings = (schema: z.ZodTypeAny, value: unknown, prefix?: string[]) => {
  const parsed = schema.safeParse(value)
  return parsed.success ? [] : findingsOf(parsed.error, prefix)
}

describe('findingsOf', () => {
  it.each([
    ['a field left out', z.strictObject({ a: z.string() }), {}, [{ pointer: '/a', code: 'required' }]],
    ['another kind', z.strictObject({ a: z.number() }), { a: 'x' }, [{ pointer: '/a', code: 'wrong-type', params: { expected: 'number' } }]],
    ['fields nobody asked for', z.strictObject({}), { b: 1, c: 2 }, [{ pointer: '/b', code: 'unknown-field' }, { pointer: '/c', code: 'unknown-field' }]],
    ['a short list', z.array(z.string()).min(2), ['a'], [{ pointer: '', code: 'too-few', params: { minimum: 2 } }]],
    ['a long text', z.string().max(2), 'abc', [{ pointer: '', code: 'too-long', params: { maximum: 2 } }]],
    ['a small number', z.number().min(3), 1, [{ pointer: '', code: 'too-small', params: { minimum: 3 } }]],
    ['a large number', z.number().max(3), 4, [{ pointer: '', code: 'too-large', params: { maximum: 3 } }]],
    ['a value outside a list', z.enum(['x', 'y']), 'z', [{ pointer: '', code: 'not-in-list', params: { options: ['x', 'y'] } }]],
    ['an unknown kind of a union', z.discriminatedUnion('kind', [z.strictObject({ kind: z.literal('p') })]), { kind: 'q' }, [{ pointer: '/kind', code: 'not-in-list', params: { options: ['p'] } }]],
    ['a text of another form', z.string().uuid(), 'x', [{ pointer: '', code: 'wrong-format' }]],
    ['a code of its own', z.string().min(3, 'far-too-short'), 'x', [{ pointer: '', code: 'far-too-short', params: { minimum: 3 } }]],
  ])('reads %s', (_, schema, value, expected) => {
    expect(findings(schema, value)).toEqual(expected)
  })

  it('takes code and figures from a custom issue', () => {
    const schema = z.array(z.string()).superRefine((_, context) =>
      context.addIssue({ code: 'custom', path: [1], message: 'id-repeated', params: { id: 'A' } }))
    expect(findings(schema, ['A', 'A'])).toEqual([{ pointer: '/1', code: 'id-repeated', params: { id: 'A' } }])
  })

  it('places findings below a prefix', () => {
    expect(findings(z.strictObject({ page: z.string() }), {}, ['query'])).toEqual([{ pointer: '/query/page', code: 'required' }])
  })
})

it('pointers escape as RFC 6901 says', () => {
  expect(pointerTo(['a/b', 0, 'm~n'])).toBe('/a~1b/0/m~0n')
  expect(pointerTo([])).toBe('')
})

describe('texts', () => {
  it('keep a line in form NFC without the blanks around it', () => {
    expect(lineText(20).parse('  Zoe\u0308 ')).toBe('Zo\u00EB')
  })

  it.each([['', 'required'], ['   ', 'required'], ['a\u0000b', 'control-character'], ['a\nb', 'control-character'], ['x'.repeat(21), 'too-long']])('refuse %j as a line', (text, code) => {
    expect(findings(lineText(20), text)).toEqual([expect.objectContaining({ code })])
  })

  it('compare addresses in lower case', () => {
    expect(emailAddress.parse(' Mara@Example.ORG ')).toBe('mara@example.org')
    expect(findings(emailAddress, 'mara')).toEqual([{ pointer: '', code: 'not-an-email' }])
  })

  it('ask length of a password and nothing else', () => {
    expect(newPassword.parse('            ')).toHaveLength(12)
    expect(findings(newPassword, 'elevenchars')).toEqual([expect.objectContaining({ code: 'password-too-short' })])
  })
})
