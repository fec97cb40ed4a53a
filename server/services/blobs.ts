import { createCipheriv, createDecipheriv, createHash, randomBytes } from 'node:crypto'
import { and, eq, lt, sql } from 'drizzle-orm'
import { config } from '../config'
import type { Database, Queryable, Transaction } from '../database/client'
import { newId } from '../database/newId'
import { onlyRow } from '../database/onlyRow'
import { blob, blobChunk } from '../database/schema/blob'
import { DomainError } from '../domainError'

/** PostgreSQL takes no parameter of some hundred megabytes; chunks also bound the memory of a reader. */
export const CHUNK_BYTES = 4 * 1024 * 1024
const NONCE_BYTES = 12
const TAG_BYTES = 16
/** Pending bytes that no transaction has kept within this many hours belong to a request that died. */
const PENDING_HOURS = 24

export interface StoredBlob {
  readonly id: string
  /** SHA-256 of the bytes as received, hex. */
  readonly hash: string
  readonly size: number
}

async function* once(bytes: Uint8Array): AsyncGenerator<Uint8Array> {
  yield bytes
}

/** Cut at chunk borders whatever the source's pieces are. */
async function* chunked(source: AsyncIterable<Uint8Array>): AsyncGenerator<Buffer> {
  let held: Buffer[] = []
  let size = 0
  for await (const piece of source) {
    held.push(Buffer.from(piece.buffer, piece.byteOffset, piece.byteLength))
    size += piece.byteLength
    while (size >= CHUNK_BYTES) {
      const all = Buffer.concat(held)
      yield all.subarray(0, CHUNK_BYTES)
      held = [all.subarray(CHUNK_BYTES)]
      size = all.length - CHUNK_BYTES
    }
  }
  if (size > 0) yield Buffer.concat(held)
}

/** Binds a sealed chunk to its blob and place, so that chunks cannot be moved or swapped. */
const placeOf = (blobId: string, number: number) => Buffer.from(`${blobId}/${number}`)

function seal(bytes: Uint8Array, blobId: string, number: number): Buffer {
  const nonce = randomBytes(NONCE_BYTES)
  const cipher = createCipheriv('aes-256-gcm', config().secrets.allocationKey, nonce).setAAD(placeOf(blobId, number))
  return Buffer.concat([nonce, cipher.update(bytes), cipher.final(), cipher.getAuthTag()])
}

function unseal(bytes: Uint8Array, blobId: string, number: number): Buffer {
  const sealed = Buffer.from(bytes)
  const decipher = createDecipheriv('aes-256-gcm', config().secrets.allocationKey, sealed.subarray(0, NONCE_BYTES)).setAAD(placeOf(blobId, number))
  decipher.setAuthTag(sealed.subarray(-TAG_BYTES))
  return Buffer.concat([decipher.update(sealed.subarray(NONCE_BYTES, -TAG_BYTES)), decipher.final()])
}

/**
 * Stores bytes while they arrive, in bounded memory, and hashes them on the way. They are pending until
 * `keepBlob`; what is never kept is swept.
 *
 * @param limit most bytes to take. @throws {DomainError} `too-large` beyond it; nothing stays behind.
 */
export async function putBlob(db: Queryable, source: AsyncIterable<Uint8Array> | Uint8Array, { sealed = false, limit = Infinity } = {}): Promise<StoredBlob> {
  const id = newId()
  const hash = createHash('sha256')
  let size = 0
  let chunks = 0
  try {
    for await (const chunk of chunked(source instanceof Uint8Array ? once(source) : source)) {
      size += chunk.length
      if (size > limit) throw new DomainError('too-large', [{ code: 'over-limit', params: { limit } }])
      hash.update(chunk)
      await db.insert(blobChunk).values({ blobId: id, number: chunks, bytes: sealed ? seal(chunk, id, chunks) : chunk })
      chunks += 1
    }
  }
  catch (error) {
    if (chunks > 0) await db.delete(blobChunk).where(eq(blobChunk.blobId, id)).catch(() => undefined)
    throw error
  }
  const digest = hash.digest('hex')
  await db.insert(blob).values({ id, sealed, size, hash: digest, chunks })
  return { id, hash: digest, size }
}

/** Part of the transaction that refers to the blob. */
export async function keepBlob(tx: Transaction, id: string): Promise<void> {
  onlyRow(await tx.update(blob).set({ pending: false }).where(eq(blob.id, id)).returning({ id: blob.id }))
}

/** The bytes as received, chunk by chunk. */
export async function* readBlob(db: Queryable, id: string): AsyncGenerator<Buffer> {
  const { sealed, chunks } = onlyRow(await db.select().from(blob).where(eq(blob.id, id)))
  for (let number = 0; number < chunks; number++) {
    const { bytes } = onlyRow(await db.select({ bytes: blobChunk.bytes }).from(blobChunk).where(and(eq(blobChunk.blobId, id), eq(blobChunk.number, number))))
    yield sealed ? unseal(bytes, id, number) : Buffer.from(bytes)
  }
}

/** For what is known to be small or is needed whole. */
export async function readWholeBlob(db: Queryable, id: string): Promise<Buffer> {
  const pieces: Buffer[] = []
  for await (const piece of readBlob(db, id)) pieces.push(piece)
  return Buffer.concat(pieces)
}

/** Removes pending bytes that nobody kept. */
export async function sweepBlobs(db: Database): Promise<number> {
  return db.transaction(async (tx) => {
    const stale = await tx.delete(blob).where(and(eq(blob.pending, true), lt(blob.createdAt, sql`now() - make_interval(hours => ${PENDING_HOURS})`))).returning({ id: blob.id })
    for (const { id } of stale) await tx.delete(blobChunk).where(eq(blobChunk.blobId, id))
    return stale.length
  })
}
