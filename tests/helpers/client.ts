import {
  isMedia, type AnswerOf, type BodyInputOf, type Operation, type ParamsInputOf, type QueryInputOf,
} from '#shared/contract/operation'
import type { Problem } from '#shared/contract/problems'
import { fromEnvironment } from './database'

/** What a call carries; a file that is uploaded is given as `file`. */
export interface Call<O> {
  readonly params?: ParamsInputOf<O>
  readonly query?: QueryInputOf<O>
  readonly body?: BodyInputOf<O>
  readonly file?: { readonly bytes: string | Uint8Array, readonly type: string }
  readonly revision?: number
  readonly headers?: Readonly<Record<string, string>>
}

export const serverOrigin = () => fromEnvironment('E2E_URL').replace(/\/$/, '')

export function addressOf(operation: Operation, { params = {}, query = {} }: { params?: object | undefined, query?: object | undefined }): string {
  const values: Record<string, unknown> = { ...params }
  const path = operation.path.replace(/\[([^\]]+)\]/g, (_, name: string) => encodeURIComponent(String(values[name])))
  const search = new URLSearchParams(Object.entries(query).map(([name, value]) => [name, String(value)])).toString()
  return search ? `${path}?${search}` : path
}

function payloadOf(operation: Operation, { body, file }: Call<Operation>): { body?: BodyInit, type?: string } {
  if (file) return { body: file.bytes as BodyInit, type: file.type }
  if (body !== undefined) return { body: JSON.stringify(body), type: 'application/json' }
  return operation.body !== null && !isMedia(operation.body) ? { type: 'application/json' } : {}
}

/** Somebody at the interface: signed in, or nobody. Speaks as a browser would: cookie and origin. */
export class Client {
  readonly #cookies = new Map<string, string>()

  constructor(readonly origin = serverOrigin()) {}

  /** Any request; keeps the cookies that come back. */
  async request(path: string, init: RequestInit = {}): Promise<Response> {
    const headers = new Headers(init.headers)
    if (this.#cookies.size > 0) headers.set('cookie', this.cookie())
    if (init.method && init.method !== 'GET' && !headers.has('origin')) headers.set('origin', this.origin)
    const response = await fetch(this.origin + path, { redirect: 'manual', ...init, headers })
    for (const cookie of response.headers.getSetCookie()) this.#keep(cookie)
    return response
  }

  /** The cookies at hand as a header, for requests that are written by hand. */
  cookie(): string {
    return [...this.#cookies].map(([name, value]) => `${name}=${value}`).join('; ')
  }

  #keep(cookie: string): void {
    const [pair = ''] = cookie.split(';')
    const name = pair.slice(0, pair.indexOf('='))
    const value = pair.slice(pair.indexOf('=') + 1)
    if (value === '') this.#cookies.delete(name)
    else this.#cookies.set(name, value)
  }

  send<O extends Operation>(operation: O, call: Call<O> = {}): Promise<Response> {
    const { body, type } = payloadOf(operation, call)
    return this.request(addressOf(operation, call), {
      method: operation.method,
      ...(body === undefined ? {} : { body }),
      headers: {
        ...(type ? { 'content-type': type } : {}),
        ...(call.revision === undefined ? {} : { 'if-match': `"${call.revision}"` }),
        ...call.headers,
      },
    })
  }

  /** The operation's answer; a problem fails the test with its code and findings. */
  async call<O extends Operation>(operation: O, call: Call<O> = {}): Promise<AnswerOf<O>> {
    const response = await this.send(operation, call)
    if (!response.ok) throw new Error(`${operation.id} answered ${response.status}: ${await response.text()}`)
    return (response.status === 204 ? undefined : await response.json()) as AnswerOf<O>
  }

  /** The problem that refuses the operation; an answer fails the test. */
  async refused<O extends Operation>(operation: O, call: Call<O> = {}): Promise<Problem> {
    const response = await this.send(operation, call)
    if (response.ok) throw new Error(`${operation.id} answered ${response.status} where a refusal was expected`)
    return await response.json() as Problem
  }

  /** Signs in through next-auth's own form; the answer tells whether it worked. */
  async signIn({ email, password }: { email: string, password: string }): Promise<Response> {
    const { csrfToken } = await (await this.request('/api/auth/csrf')).json() as { csrfToken: string }
    return this.#form('/api/auth/callback/credentials', { csrfToken, email, password })
  }

  async signOut(): Promise<Response> {
    const { csrfToken } = await (await this.request('/api/auth/csrf')).json() as { csrfToken: string }
    return this.#form('/api/auth/signout', { csrfToken })
  }

  #form(path: string, fields: Record<string, string>): Promise<Response> {
    return this.request(path, {
      method: 'POST',
      headers: { 'content-type': 'application/x-www-form-urlencoded' },
      body: new URLSearchParams({ ...fields, json: 'true' }),
    })
  }
}

export const signedOut = () => new Client()

/** A client signed in with these; fails when the sign-in does. */
export async function signedInAs(account: { email: string, password: string }): Promise<Client> {
  const client = new Client()
  const response = await client.signIn(account)
  if (!response.ok) throw new Error(`sign-in of ${account.email} answered ${response.status}`)
  return client
}
