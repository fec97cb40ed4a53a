import { sha256 as sha256Of } from '@noble/hashes/sha2.js'
import { bytesToHex, utf8ToBytes } from '@noble/hashes/utils.js'
import canonicalize from 'canonicalize'

/** Whatever JSON can say; the only thing that is hashed or signed. */
export type CanonicalValue = null | boolean | number | string | readonly CanonicalValue[] | { readonly [key: string]: CanonicalValue }

/** What was to be made canonical is no JSON value; `pointer` says where. */
export class NotCanonicalError extends Error {
  constructor(readonly pointer: string, readonly fault: 'not-finite' | 'not-json' | 'not-nfc' | 'lone-surrogate') {
    super(`${pointer || '/'}: ${fault}`)
    this.name = 'NotCanonicalError'
  }
}

const isPlain = (value: object) => [Object.prototype, null].includes(Object.getPrototypeOf(value) as object | null)

function checkText(text: string, pointer: string): void {
  if (/\p{Surrogate}/u.test(text)) throw new NotCanonicalError(pointer, 'lone-surrogate')
  if (text !== text.normalize('NFC')) throw new NotCanonicalError(pointer, 'not-nfc')
}

function check(value: unknown, pointer: string): void {
  if (value === null || typeof value === 'boolean') return
  if (typeof value === 'string') return checkText(value, pointer)
  if (typeof value === 'number') {
    if (!Number.isFinite(value)) throw new NotCanonicalError(pointer, 'not-finite')
    return
  }
  if (Array.isArray(value)) return value.forEach((member, index) => check(member, `${pointer}/${index}`))
  if (typeof value !== 'object' || !isPlain(value)) throw new NotCanonicalError(pointer, 'not-json')
  for (const [key, member] of Object.entries(value)) {
    checkText(key, pointer)
    check(member, `${pointer}/${key}`)
  }
}

/**
 * The one text of a JSON value (RFC 8785): members sorted, numbers in shortest form, no blanks.
 *
 * @throws {NotCanonicalError} for undefined, dates, class instances, non-finite numbers, lone surrogates and
 *   text that is not NFC: input is validated before it is hashed, never repaired here.
 */
export function canonicalText(value: unknown): string {
  check(value, '')
  const text = canonicalize(value)
  if (text === undefined) throw new NotCanonicalError('', 'not-json')
  return text
}

/** UTF-8 bytes of `canonicalText`. */
export const canonicalBytes = (value: unknown): Uint8Array => utf8ToBytes(canonicalText(value))

/** SHA-256 as 64 lower-case hex digits (FIPS 180-4). */
export const sha256 = (bytes: Uint8Array): string => bytesToHex(sha256Of(bytes))
