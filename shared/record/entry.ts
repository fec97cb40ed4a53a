import { sha256 as sha256Of } from '@noble/hashes/sha2.js'
import { bytesToHex, concatBytes, hexToBytes, utf8ToBytes } from '@noble/hashes/utils.js'
import { canonicalBytes, canonicalText } from './canonical'

export const RECORD_FORMAT = 'stipule-record/1'
/** `previousHash` of a chain's first entry. */
export const NO_PREVIOUS = '0'.repeat(64)

export type DetailValue = string | number | boolean | null

/** One field of the detail with its salt, 16 bytes as hex, or withheld: then value and salt are both absent. */
export interface DetailField {
  readonly salt: string
  readonly value: DetailValue
}

export interface EntryActor {
  readonly personId: string | null
  readonly name: string | null
  readonly roles: readonly string[]
}

/** What is hashed of an entry. The format is append-only and cannot be migrated (docs/record-format.md). */
export interface EntryHead {
  /** The study's id, or `installation`. */
  readonly chain: string
  /** From 1, without gaps. */
  readonly seq: number
  readonly format: typeof RECORD_FORMAT
  /** Database clock, ISO 8601 UTC with milliseconds. */
  readonly time: string
  /** The clock stood before the previous entry's time. */
  readonly clockStepBack: boolean
  readonly actor: EntryActor
  readonly requestId: string | null
  /** Network address of the request. */
  readonly origin: string | null
  readonly action: string
  readonly subject: string
  readonly detailHash: string
  readonly previousHash: string
}

/** SHA-256(salt ‖ canonical {field, value}), hex. */
export const fieldCommitment = (field: string, { salt, value }: DetailField): string =>
  bytesToHex(sha256Of(concatBytes(hexToBytes(salt), canonicalBytes({ field, value }))))

/**
 * SHA-256 over the canonical list of field commitments in sorted order: a reader who is given only some fields
 * and the commitments of the others can still verify it.
 */
export const detailHash = (commitments: readonly string[]): string =>
  bytesToHex(sha256Of(utf8ToBytes(canonicalText([...commitments].sort()))))

/** SHA-256(0x00 ‖ canonical head): at once the chain's link and a leaf of RFC 9162. */
export const entryHash = (head: EntryHead): string =>
  bytesToHex(sha256Of(concatBytes(Uint8Array.of(0), canonicalBytes(head))))
