import { randomUUID } from 'node:crypto'
import postgres from 'postgres'
import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { verifyInclusion } from '#shared/record/merkle'
import type { StudyId } from '#shared/schemas/ids'
import { appendRecord, entryProof, masked, readRecord, SYSTEM, treeHead, verifyStoredChain } from '../../../server/services/record'
import { freshDatabase, type TestDatabase } from '../../helpers/database'

let database: TestDatabase
beforeAll(async () => {
  database = await freshDatabase()
})
afterAll(() => database.drop())

const newChain = () => ({ studyId: randomUUID() as StudyId })
const append = (chain: ReturnType<typeof newChain>, detail = {}) =>
  database.db.transaction(tx => appendRecord(tx, { chain, actor: SYSTEM, action: 'test.done', subject: 'x', detail }))

/** What the database says to a statement, by its code. */
async function refusalOf(url: string, statement: string): Promise<string> {
  const sql = postgres(url, { max: 1, onnotice: () => {} })
  try {
    await sql.unsafe(statement)
    return 'accepted'
  }
  catch (error) {
    return (error as postgres.PostgresError).code
  }
  finally {
    await sql.end()
  }
}

describe('the record on the database', () => {
  it('has no gaps and one line of hashes when fifty write at once', async () => {
    const chain = newChain()
    await Promise.all(Array.from({ length: 50 }, (_, index) => append(chain, { index })))
    const entries = await readRecord(database.db, { chain, cleared: true, after: 0, limit: 100 })
    expect(entries.map(({ head }) => head.seq)).toEqual(Array.from({ length: 50 }, (_, index) => index + 1))
    expect(await verifyStoredChain(database.db, chain)).toMatchObject({ size: 50, fault: null })
  })

  it('keeps nothing of a transaction that fails', async () => {
    const chain = newChain()
    await append(chain)
    const failing = database.db.transaction(async (tx) => {
      await appendRecord(tx, { chain, actor: SYSTEM, action: 'test.done', subject: 'x', detail: {} })
      throw new Error('undone')
    })
    await expect(failing).rejects.toThrow('undone')
    expect((await append(chain)).seq).toBe(2)
  })

  it('masks at reading, and what is masked still verifies', async () => {
    const chain = newChain()
    await append(chain, { open: 'for all', arms: masked('HIGH') })
    const [blinded] = await readRecord(database.db, { chain, cleared: false, after: 0, limit: 1 })
    expect(JSON.stringify(blinded)).not.toContain('HIGH')
    expect(blinded!.detail.open).toMatchObject({ value: 'for all' })
    const [cleared] = await readRecord(database.db, { chain, cleared: true, after: 0, limit: 1 })
    expect(cleared!.detail.arms).toMatchObject({ value: 'HIGH' })
  })

  it('gives a tree head and a proof that an entry lies in it', async () => {
    const chain = newChain()
    for (let index = 0; index < 7; index++) await append(chain)
    const { size, root } = await treeHead(database.db, chain)
    const [, , third] = await readRecord(database.db, { chain, cleared: true, after: 0, limit: 7 })
    expect(verifyInclusion({ leaf: third!.hash, index: 2, size, root, proof: await entryProof(database.db, chain, { seq: 3, size }) })).toBe(true)
  })

  const INSUFFICIENT_PRIVILEGE = '42501'
  const RESTRICTED = '23001'
  const STATEMENTS = ['update record_entry set action = \'test.undone\'', 'delete from record_entry', 'truncate record_entry', 'truncate record_entry_00', 'update signature set name = \'x\'', 'delete from signature', 'truncate signature']

  it.each(STATEMENTS)('refuses the application: %s', async (statement) => {
    expect(await refusalOf(database.url, statement)).toBe(INSUFFICIENT_PRIVILEGE)
  })

  it.each(['update record_entry set action = \'test.undone\'', 'delete from record_entry', 'truncate record_entry', 'truncate record_entry_07'])('refuses the owner too, while the triggers stand: %s', async (statement) => {
    await append(newChain())
    expect(await refusalOf(database.ownerUrl, statement)).toBe(RESTRICTED)
  })

  it('notices an entry that the owner changed behind the triggers', async () => {
    const chain = newChain()
    await append(chain)
    await append(chain)
    await append(chain)
    expect(await refusalOf(database.ownerUrl, `alter table record_entry disable trigger record_entry_append_only; update record_entry set action = 'test.undone' where chain = '${chain.studyId}' and seq = 2; alter table record_entry enable trigger record_entry_append_only`)).toBe('accepted')
    expect((await verifyStoredChain(database.db, chain)).fault).toEqual({ seq: 2, code: 'head-changed' })
  })
})
