import { defineEventHandler, getResponseStatus, getRouterParam, setResponseStatus, type EventHandler, type H3Event } from 'h3'
import { isSigned, opensToAdministrators, refusal, type Action } from '#shared/access/actions'
import type { AnswerOf, BodyOf, Media, Operation, ParamsOf, QueryOf, Shape } from '#shared/contract/operation'
import { studyId as studyIdSchema } from '#shared/schemas/ids'
import { database, type Database } from '../database/client'
import { DomainError } from '../domainError'
import { answerProblem } from '../error'
import { log } from '../log'
import { signedOperation } from '../services/signatureAttempts'
import { outsideStudies, standingOf, type RequestFacts, type Viewer } from '../services/viewer'
import { fittingAnswer } from './fittingAnswer'
import { changesState, requireContentType, requireOwnOrigin } from './ownOrigin'
import { readInput, readRevision } from './readInput'
import { requestFacts } from './requestFacts'
import type { Sendable } from './sendable'
import { signedIn } from './signedIn'

type EventIfMedia<O> = O extends Operation<infer _P, infer _Q, infer B extends Shape, infer A extends Shape>
  ? (Extract<B | A, Media> extends never ? unknown : { readonly event: H3Event }) : unknown

type InputOf<O> = EventIfMedia<O> & {
  readonly params: ParamsOf<O>
  readonly query: QueryOf<O>
  readonly body: BodyOf<O>
  readonly revision: O extends { revision: true } ? number : undefined
  readonly db: Database
}

type Answering<O> = AnswerOf<O> extends undefined ? Promise<void> | void
  : AnswerOf<O> extends Media ? unknown
    : Promise<Sendable<AnswerOf<O>>> | Sendable<AnswerOf<O>>

/** Who asks, with what they hold where the operation takes place. A stranger to a study reads `not-found`. */
async function resolveViewer(event: H3Event, operation: Operation, action: Action): Promise<Viewer> {
  const session = await signedIn(event)
  if (!session) throw new DomainError('not-signed-in')
  requireSafeRequest(event, operation)
  const { installationRole, person, sessionId } = session
  const viewer = { person, sessionId, request: requestFacts(event) }
  if (operation.scope === 'installation') return { ...viewer, standing: outsideStudies(installationRole) }

  const studyId = studyIdSchema.safeParse(getRouterParam(event, 'studyId'))
  const standing = studyId.success ? await standingOf(database(), person.id, studyId.data) : null
  const member = standing !== null && standing.studyRoles.length > 0
  const administers = installationRole === 'administrator' && opensToAdministrators(action)
  if (!standing || !(member || administers)) throw new DomainError('not-found')
  return { ...viewer, standing }
}

function requireSafeRequest(event: H3Event, operation: Operation): void {
  if (!changesState(event.method)) return
  requireOwnOrigin(event)
  requireContentType(event, operation)
}

async function readContext(event: H3Event, operation: Operation) {
  const input = await readInput(event, operation)
  return { ...input, revision: operation.revision ? readRevision(event) : undefined, db: database(), event }
}

/** Runs one operation and answers with its result or its problem; one line in the log either way. */
function answering(operation: Operation, run: (event: H3Event) => Promise<unknown>): EventHandler {
  return defineEventHandler(async (event) => {
    const started = performance.now()
    try {
      const answer = fittingAnswer(operation, await run(event))
      if (answer === null) setResponseStatus(event, 204)
      return answer
    }
    catch (error) {
      return await answerProblem(event, error)
    }
    finally {
      log.info({ requestId: event.context.requestId, operation: operation.id, status: getResponseStatus(event), ms: Math.round(performance.now() - started) })
    }
  })
}

/**
 * The route of an operation. In this order: session, own origin and content type (when it changes something),
 * membership, permission, input, revision, one call, answer. The handler receives what was read and the viewer.
 */
export function defineApiHandler<O extends Operation>(
  operation: O,
  handle: (context: InputOf<O> & { readonly viewer: Viewer }) => Answering<O>,
): EventHandler {
  const { action } = operation
  if (typeof action !== 'string') throw new TypeError(`${operation.id} is public: take definePublicHandler`)
  return answering(operation, async (event) => {
    const viewer = await resolveViewer(event, operation, action)
    const refused = refusal(action, viewer.standing)
    if (refused) throw new DomainError(refused)
    const context = { ...await readContext(event, operation), viewer }
    const run = () => handle(context as typeof context & InputOf<O>)
    return isSigned(action) ? signedOperation(context.db, { studyId: studyIdSchema.parse(getRouterParam(event, 'studyId')), viewer }, run) : run()
  })
}

/** The route of an operation that everyone may call; there is no viewer. */
export function definePublicHandler<O extends Operation>(
  operation: O,
  handle: (context: InputOf<O> & { readonly request: RequestFacts }) => Answering<O>,
): EventHandler {
  if (typeof operation.action === 'string') throw new TypeError(`${operation.id} is not public: take defineApiHandler`)
  return answering(operation, async (event) => {
    requireSafeRequest(event, operation)
    const context = { ...await readContext(event, operation), request: requestFacts(event) }
    return handle(context as typeof context & InputOf<O>)
  })
}
