import { drizzle } from 'drizzle-orm/postgres-js'
import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { ledgerView } from '#shared/contract/ledger'
import type { Database } from '../../../server/database/client'
import { readLedger } from '../../../server/services/ledger'
import { freshDatabase, type TestDatabase } from '../../helpers/database'
import { allocate, putPlanInForce, serviceStudy, upload, uploadAndJudge, type ServiceStudy } from '../../helpers/serviceStudy'
import { trialAllocation, trialFile, trialPlan } from '../../helpers/trial'

let database: TestDatabase
let own: ServiceStudy

beforeAll(async () => {
  database = await freshDatabase()
})
afterAll(() => database.drop())

const ledger = (db: Database = database.db) => readLedger(db, { studyId: own.studyId })

async function statementsOf(): Promise<number> {
  const statements: string[] = []
  await ledger(drizzle(database.sql, { logger: { logQuery: statement => void statements.push(statement) } }))
  return statements.length
}

describe('the ledger', () => {
  it('is empty before the plan is signed', async () => {
    own = await serviceStudy(database.db, null)
    expect(await ledger()).toEqual({ planVersion: null, planSignedAt: null, columns: [], rows: [] })
  })

  it('has a row for every planned analysis and a column for every accepted extract, by cut-off', async () => {
    own = await serviceStudy(database.db)
    await uploadAndJudge(own, trialFile(), { cutOff: '2026-06-11', purpose: 'database-lock' })
    await uploadAndJudge(own, trialFile({ subjects: 20 }))
    await upload(own, trialFile(), { cutOff: '2026-05-01', fileName: 'between.csv' })
    await upload(own, trialFile({ week8: { 1: 'x' } }))
    const view = await ledger()
    expect(ledgerView.parse(JSON.parse(JSON.stringify(view)))).toBeTruthy()
    expect(view.columns.map(({ number, title, standing, state, subjects }) => [number, title, standing, state, subjects])).toEqual([
      [2, 'Look 1', 'look', 'checked', 20], [3, 'Extract 3, unscheduled', 'unscheduled', 'awaiting-reason', 40], [1, 'Database lock', 'decision-point', 'checked', 40],
    ])
    expect(view.rows).toMatchObject([
      {
        analysis: 'PAIN-T', label: 'Pain between arms', method: 'two-sample-t', importance: 'primary', deviation: null,
        detail: { endpoint: 'Pain score', visits: ['Week 8'], arms: ['Active 20 mg', 'Placebo'], allArms: true, pretest: true },
        cells: [{ verdict: { word: 'not-assessable', reason: 'allocation-withheld' } }, { verdict: null, stepLabel: null }, { verdict: { word: 'not-assessable' } }],
      },
      { analysis: 'PAIN-P', detail: { visits: ['Baseline', 'Week 8'], arms: [], allArms: false, pretest: true }, cells: [{ verdict: { word: 'planned-method-stands' } }, { verdict: null }, {}] },
    ])
  })

  it('keeps rows that only an earlier version registered, with cells only where it was in force', async () => {
    own = await serviceStudy(database.db)
    await uploadAndJudge(own, trialFile())
    const document = trialPlan(own.document!.protocol.number, { analyses: own.document!.analyses.slice(1) })
    await putPlanInForce(database.db, { studyId: own.studyId, authorId: own.people.biostatistician.id, document, version: 2 })
    await uploadAndJudge(own, trialFile({ seed: 3 }), { cutOff: '2026-04-06' })
    const { planVersion, rows } = await ledger()
    expect(planVersion).toBe(2)
    expect(rows.map(({ analysis, cells }) => [analysis, ...cells.map(({ verdict }) => verdict?.word ?? null)])).toEqual([
      ['PAIN-P', 'planned-method-stands', 'planned-method-stands'], ['PAIN-T', 'not-assessable', null],
    ])
  })

  it('takes the same number of statements however many extracts there are', async () => {
    own = await serviceStudy(database.db)
    await allocate(own, trialAllocation('spread'))
    await uploadAndJudge(own, trialFile())
    const one = await statementsOf()
    for (let seed = 20; seed < 25; seed++) await uploadAndJudge(own, trialFile({ seed }))
    expect(await statementsOf()).toBe(one)
    expect(one).toBeLessThanOrEqual(8)
  })
})
