import type { z } from 'zod'
import type { Action } from '../access/actions'
import type { ProblemCode } from './problems'

/** A body or answer that is not JSON: a file that comes in, a file that goes out, an event stream. */
export interface Media { readonly media: 'upload' | 'file' | 'events', readonly types: readonly string[] }

/** Who may call: a key of the role × action table, or everyone for a stated reason. */
export type Permission = Action | { readonly public: string }

export type Shape = z.ZodTypeAny | Media | null

/**
 * One operation of the HTTP interface, declared once: the route enforces it, the client calls through it and
 * the published description is made from it. A schema is strict; `null` says that there is nothing.
 */
export interface Operation<
  Params extends z.ZodTypeAny | null = z.ZodTypeAny | null,
  Query extends z.ZodTypeAny | null = z.ZodTypeAny | null,
  Body extends Shape = Shape,
  Answer extends Shape = Shape,
> {
  readonly id: string
  readonly method: 'GET' | 'POST' | 'PUT' | 'DELETE'
  /** As the file tree spells it, e.g. `/api/studies/[studyId]/extracts`. */
  readonly path: string
  readonly action: Permission
  /** `study` resolves the viewer's membership of `studyId`; a stranger reads 404. */
  readonly scope: 'installation' | 'study'
  readonly params: Params
  readonly query: Query
  readonly body: Body
  readonly answer: Answer
  /** Whether the request must say which revision it changes (`If-Match`). */
  readonly revision?: true
  /** Problem codes beyond those that every operation of its kind can answer. */
  readonly errors: readonly ProblemCode[]
  readonly example: Readonly<{ params?: unknown, query?: unknown, body?: unknown, answer?: unknown }>
}

type ValueOf<S> = S extends z.ZodTypeAny ? z.output<S> : S extends Media ? Media : undefined

export type ParamsOf<O> = O extends Operation<infer P, infer _Q, infer _B, infer _A> ? ValueOf<P> : never
export type QueryOf<O> = O extends Operation<infer _P, infer Q, infer _B, infer _A> ? ValueOf<Q> : never
export type BodyOf<O> = O extends Operation<infer _P, infer _Q, infer B, infer _A> ? ValueOf<B> : never
export type AnswerOf<O> = O extends Operation<infer _P, infer _Q, infer _B, infer A> ? ValueOf<A> : never

type InputOfShape<S> = S extends z.ZodTypeAny ? z.input<S> : undefined

/** What a client sends: before defaults are filled in and without the brands of identifiers. */
export type ParamsInputOf<O> = O extends Operation<infer P, infer _Q, infer _B, infer _A> ? InputOfShape<P> : never
export type QueryInputOf<O> = O extends Operation<infer _P, infer Q, infer _B, infer _A> ? InputOfShape<Q> : never
export type BodyInputOf<O> = O extends Operation<infer _P, infer _Q, infer B, infer _A> ? InputOfShape<B> : never

export const isMedia = (shape: Shape): shape is Media => shape !== null && 'media' in shape

type Revised<O> = O & { readonly revision: true }

/** Keeps the literal types of a declaration, and whether it asks for a revision. */
export function defineOperation<
  P extends z.ZodTypeAny | null, Q extends z.ZodTypeAny | null, B extends Shape, A extends Shape,
>(operation: Revised<Operation<P, Q, B, A>>): Revised<Operation<P, Q, B, A>>
export function defineOperation<
  P extends z.ZodTypeAny | null, Q extends z.ZodTypeAny | null, B extends Shape, A extends Shape,
>(operation: Operation<P, Q, B, A>): Operation<P, Q, B, A>
export function defineOperation(operation: Operation): Operation {
  return operation
}
