/** What is wrong in a plan and where. Codes are worded under `plan.issues`. */
export interface PlanIssue {
  /** JSON pointer (RFC 6901) into the plan. */
  readonly pointer: string
  readonly code: string
  readonly params?: Record<string, string | number | string[]>
}

type Params = NonNullable<PlanIssue['params']>

/** One issue at a path of keys and indices. */
export function issueAt(path: readonly (string | number)[], code: string, params?: Params): PlanIssue {
  const pointer = path.map(part => `/${String(part).replaceAll('~', '~0').replaceAll('/', '~1')}`).join('')
  return params ? { pointer, code, params } : { pointer, code }
}

/** The issue when `wrong` holds, else nothing. */
export function issueIf(wrong: boolean, path: readonly (string | number)[], code: string, params?: Params): PlanIssue[] {
  return wrong ? [issueAt(path, code, params)] : []
}
