import { getQuery, getRequestHeader, getRouterParams, type H3Event } from 'h3'
import type { z } from 'zod'
import { isMedia, type Operation } from '#shared/contract/operation'
import type { ProblemDetail } from '#shared/contract/problems'
import { findingsOf, pointerTo } from '#shared/schemas/findings'
import { DomainError } from '../domainError'

/** Largest JSON body, in bytes; files have limits of their own. */
const JSON_LIMIT = 2 * 1024 * 1024

export interface Input { readonly params: unknown, readonly query: unknown, readonly body: unknown }

/** Nothing is read of a GET: it has no body, and a page's own request during rendering has no stream to read. */
async function readJson(event: H3Event): Promise<unknown> {
  if (event.method === 'GET') return undefined
  const chunks: Buffer[] = []
  let size = 0
  for await (const chunk of event.node.req as AsyncIterable<Buffer>) {
    size += chunk.length
    if (size > JSON_LIMIT) throw new DomainError('too-large', [{ code: 'too-large', params: { maximum: JSON_LIMIT } }])
    chunks.push(chunk)
  }
  if (size === 0) return undefined
  try {
    return JSON.parse(new TextDecoder('utf-8', { fatal: true }).decode(Buffer.concat(chunks)))
  }
  catch {
    throw new DomainError('unreadable-request')
  }
}

/** Checks one part; without a schema it must be empty. */
function check(schema: z.ZodTypeAny | null, value: unknown, prefix: readonly string[], findings: ProblemDetail[]): unknown {
  if (schema === null) {
    const keys = typeof value === 'object' && value !== null ? Object.keys(value) : []
    findings.push(...keys.map(key => ({ pointer: pointerTo([...prefix, key]), code: 'unknown-field' })))
    return undefined
  }
  const parsed = schema.safeParse(value)
  if (parsed.success) return parsed.data
  findings.push(...findingsOf(parsed.error, prefix))
  return undefined
}

/**
 * Path, query and body of a request by the operation's schemas.
 *
 * @throws {DomainError} `unreadable-request`, `too-large`, or `invalid-input` with every finding.
 */
export async function readInput(event: H3Event, operation: Operation): Promise<Input> {
  const findings: ProblemDetail[] = []
  const params = check(operation.params, getRouterParams(event, { decode: true }), ['params'], findings)
  const query = check(operation.query, getQuery(event), ['query'], findings)
  const body = operation.body !== null && isMedia(operation.body)
    ? undefined
    : check(operation.body, await readJson(event), [], findings)
  if (findings.length > 0) throw new DomainError('invalid-input', findings)
  return { params, query, body }
}

/**
 * The revision that `If-Match` names, e.g. `"3"`.
 *
 * @throws {DomainError} `revision-missing` without it, `unreadable-request` when it names no revision.
 */
export function readRevision(event: H3Event): number {
  const tag = getRequestHeader(event, 'if-match')
  if (tag === undefined) throw new DomainError('revision-missing')
  const [, revision] = /^"(\d{1,9})"$/.exec(tag.trim()) ?? []
  if (revision === undefined) throw new DomainError('unreadable-request', [{ pointer: '/headers/if-match', code: 'wrong-format' }])
  return Number(revision)
}
