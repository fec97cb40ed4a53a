import type { ProblemDetail } from '#shared/contract/problems'

/** The figures of a finding as a message takes them: lists in one line. */
export const wordedParams = (params: ProblemDetail['params'] = {}): Record<string, string | number> =>
  Object.fromEntries(Object.entries(params).map(([name, value]) => [name, typeof value === 'object' ? value.join(', ') : value]))
