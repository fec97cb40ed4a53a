import type { ZodError, ZodIssue } from 'zod'
import type { ProblemDetail } from '../contract/problems'

type Params = NonNullable<ProblemDetail['params']>
interface Reading { readonly code: string, readonly params?: Params }

const OWN_CODE = /^[a-z][a-z0-9]*(-[a-z0-9]+)*$/

/** A JSON pointer (RFC 6901) to a place in the input. */
export const pointerTo = (path: readonly (string | number)[]) =>
  path.map(part => `/${String(part).replaceAll('~', '~0').replaceAll('/', '~1')}`).join('')

const SHORT: Record<string, string> = { string: 'too-short', array: 'too-few', set: 'too-few' }
const LONG: Record<string, string> = { string: 'too-long', array: 'too-many', set: 'too-many' }

function readIssue(issue: ZodIssue): Reading {
  switch (issue.code) {
    case 'invalid_type':
      return issue.received === 'undefined' ? { code: 'required' } : { code: 'wrong-type', params: { expected: issue.expected } }
    case 'too_small':
      return { code: SHORT[issue.type] ?? 'too-small', params: { minimum: Number(issue.minimum) } }
    case 'too_big':
      return { code: LONG[issue.type] ?? 'too-large', params: { maximum: Number(issue.maximum) } }
    case 'invalid_enum_value':
      return { code: 'not-in-list', params: { options: issue.options.map(String) } }
    case 'invalid_union_discriminator':
      return { code: 'not-in-list', params: { options: issue.options.map(String) } }
    case 'invalid_literal':
      return { code: 'not-in-list', params: { options: [String(issue.expected)] } }
    case 'invalid_union':
      return { code: 'no-form-fits' }
    default:
      return { code: 'wrong-format' }
  }
}

function findingsOfIssue(issue: ZodIssue, prefix: readonly string[]): readonly ProblemDetail[] {
  const path = [...prefix, ...issue.path]
  if (issue.code === 'unrecognized_keys') return issue.keys.map(key => ({ pointer: pointerTo([...path, key]), code: 'unknown-field' }))
  const { code, params } = readIssue(issue)
  const own = OWN_CODE.test(issue.message) ? issue.message : code
  const figures = issue.code === 'custom' ? issue.params as Params | undefined : params
  return [{ pointer: pointerTo(path), code: own, ...(figures ? { params: figures } : {}) }]
}

/**
 * What a schema found wrong, as codes with the place of each. A message that is itself a code stands for it;
 * figures of a custom issue are its `params`.
 *
 * @param prefix path of the checked value within the input, empty for a body.
 */
export function findingsOf(error: ZodError, prefix: readonly string[] = []): readonly ProblemDetail[] {
  return error.issues.flatMap(issue => findingsOfIssue(issue, prefix))
}
