import { AsyncLocalStorage } from 'node:async_hooks'
import type { DomainError } from '../domainError'
import type { RequestFacts } from '../services/viewer'

/** What next-auth's callbacks need of the request, and how they tell the route why they refused. */
export interface SignInContext {
  readonly request: RequestFacts
  refusal?: DomainError
}

export const signInContext = new AsyncLocalStorage<SignInContext>()
