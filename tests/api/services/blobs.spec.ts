import { createHash, randomBytes } from 'node:crypto'
import { eq } from 'drizzle-orm'
import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { blob, blobChunk } from '../../../server/database/schema/blob'
import { CHUNK_BYTES, keepBlob, putBlob, readBlob, readWholeBlob, sweepBlobs } from '../../../server/services/blobs'
import { freshDatabase, type TestDatabase } from '../../helpers/database'

let database: TestDatabase
beforeAll(async () => {
  database = await freshDatabase()
})
afterAll(() => database.drop())

const sha256 = (bytes: Uint8Array) => createHash('sha256').update(bytes).digest('hex')

async function* pieces(count: number, size: number): AsyncGenerator<Uint8Array> {
  for (let index = 0; index < count; index++) yield Buffer.alloc(size, index % 251)
}

describe('bytes as received', () => {
  it.each([0, 1, CHUNK_BYTES - 1, CHUNK_BYTES, CHUNK_BYTES + 1, 2 * CHUNK_BYTES + 7])('come back unaltered: %i bytes', async (size) => {
    const bytes = randomBytes(size)
    const { id, hash, size: stored } = await putBlob(database.db, bytes)
    expect([hash, stored]).toEqual([sha256(bytes), size])
    expect((await readWholeBlob(database.db, id)).equals(bytes)).toBe(true)
  })

  it('pass in bounded memory', async () => {
    const before = process.memoryUsage().rss
    let peak = before
    const watch = setInterval(() => peak = Math.max(peak, process.memoryUsage().rss), 20)
    const { id, size } = await putBlob(database.db, pieces(960, 65_536))
    let read = 0
    for await (const chunk of readBlob(database.db, id)) read += chunk.length
    clearInterval(watch)
    expect([size, read]).toEqual([960 * 65_536, 960 * 65_536])
    expect(peak - before).toBeLessThan(200 * 1024 * 1024)
  })

  it('leave nothing behind when they are too many', async () => {
    const before = await database.db.$count(blobChunk)
    await expect(putBlob(database.db, pieces(200, 65_536), { limit: 5 * 1024 * 1024 })).rejects.toMatchObject({ code: 'too-large' })
    expect(await database.db.$count(blobChunk)).toBe(before)
  })

  it('are swept when nobody kept them', async () => {
    const [kept, forgotten] = [await putBlob(database.db, randomBytes(10)), await putBlob(database.db, randomBytes(10))]
    await database.db.transaction(tx => keepBlob(tx, kept.id))
    await database.db.update(blob).set({ createdAt: new Date(Date.now() - 48 * 3600_000) })
    await sweepBlobs(database.db)
    expect(await database.db.$count(blob, eq(blob.id, kept.id))).toBe(1)
    expect(await database.db.$count(blob, eq(blob.id, forgotten.id))).toBe(0)
    expect(await database.db.$count(blobChunk, eq(blobChunk.blobId, forgotten.id))).toBe(0)
  })
})

describe('sealed bytes', () => {
  const list = Buffer.from('USUBJID,TRT01P\nS1,HIGH\n')

  it('stand encrypted in the database and open again', async () => {
    const { id, hash } = await putBlob(database.db, list, { sealed: true })
    const [row] = await database.db.select().from(blobChunk).where(eq(blobChunk.blobId, id))
    expect(Buffer.from(row!.bytes).includes('HIGH')).toBe(false)
    expect(hash).toBe(sha256(list))
    expect((await readWholeBlob(database.db, id)).equals(list)).toBe(true)
  })

  it('do not open when a byte was changed, or when they were moved to another place', async () => {
    const [one, other] = [await putBlob(database.db, list, { sealed: true }), await putBlob(database.db, list, { sealed: true })]
    const [row] = await database.db.select().from(blobChunk).where(eq(blobChunk.blobId, one.id))
    const changed = Buffer.from(row!.bytes)
    changed[20] = changed[20]! ^ 1
    await database.db.update(blobChunk).set({ bytes: row!.bytes }).where(eq(blobChunk.blobId, other.id))
    await expect(readWholeBlob(database.db, other.id)).rejects.toThrow()
    await database.db.update(blobChunk).set({ bytes: changed }).where(eq(blobChunk.blobId, one.id))
    await expect(readWholeBlob(database.db, one.id)).rejects.toThrow()
  })
})
