import { execFileSync } from 'node:child_process'
import { mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { beforeAll, describe, expect, it } from 'vitest'
import { downloadMemoOperation, listDeviationsOperation, listMemosOperation, type MemoSummary } from '#shared/contract/deviations'
import { readLedgerOperation, type LedgerView } from '#shared/contract/ledger'
import { listStudiesOperation } from '#shared/contract/studies'
import { Client } from '../helpers/client'
import { fromEnvironment } from '../helpers/database'

interface DemoAccount { readonly name: string, readonly email: string, readonly password: string, readonly roles: readonly string[] }

const accounts = JSON.parse(readFileSync(join(fromEnvironment('STIPULE_DATA_DIR'), 'demo-accounts.json'), 'utf8')) as DemoAccount[]

async function as(name: string): Promise<Client> {
  const client = new Client(fromEnvironment('DEMO_URL'))
  const account = accounts.find(({ email }) => email.startsWith(`${name}@`))!
  expect((await client.signIn(account)).status).toBe(200)
  return client
}

/** The demo as its start makes it: through services, jobs and worker, on a database that was empty. */
describe('the served demo', () => {
  let sunniva: Client
  let studies: Record<string, string>

  beforeAll(async () => {
    sunniva = await as('sunniva')
    const { studies: list } = await sunniva.call(listStudiesOperation)
    studies = Object.fromEntries(list.map(({ protocolNumber, id }) => [protocolNumber, id]))
    expect(list.map(({ demo }) => demo)).toEqual([true, true])
  })

  it('has seven accounts, and each can sign in', async () => {
    expect(accounts).toHaveLength(7)
    for (const { email } of accounts) await as(email.split('@')[0]!)
  })

  const wordsOf = ({ rows }: LedgerView) => Object.fromEntries(rows.map(({ analysis, cells }) => [
    analysis, cells.map(({ verdict }) => [verdict?.word, verdict?.step].filter(Boolean).join(' ')),
  ]))

  it('shows the twelve verdicts of the blinded study', async () => {
    const ledger = await sunniva.call(readLedgerOperation, { params: { studyId: studies['LARKMOOR-204']! } })
    expect(ledger.columns.map(({ standing, binding, state }) => [standing, binding, state])).toEqual([
      ['look', false, 'checked'], ['look', false, 'checked'], ['decision-point', true, 'checked'],
    ])
    expect(wordsOf(ledger)).toEqual({
      'COUGH-HIGH': ['not-assessable', 'planned-method-stands', 'fallback-applies WELCH'],
      'CRP-ALL': ['not-assessable', 'fallback-applies LOG', 'fallback-applies LOG'],
      'FEV-HIGH': ['planned-method-stands', 'planned-method-stands', 'planned-method-stands'],
      'RESCUE-LOW': ['not-assessable', 'no-registered-method', 'no-registered-method'],
    })
  })

  it('has one deviation that nobody has read, one that is settled and signed, one that waits for settlement', async () => {
    const { deviations } = await sunniva.call(listDeviationsOperation, { params: { studyId: studies['LARKMOOR-204']! } })
    expect(Object.fromEntries(deviations.map(({ analysis, state, acknowledgement }) => [analysis.id, [state, acknowledgement.state]]))).toEqual({
      'COUGH-HIGH': ['open', 'awaited'], 'CRP-ALL': ['memo-signed', 'acknowledged'], 'RESCUE-LOW': ['open', 'acknowledged'],
    })
  })

  it('shows the open-label study without a release', async () => {
    const ledger = await sunniva.call(readLedgerOperation, { params: { studyId: studies['THORNEY-118']! } })
    expect(Object.values(wordsOf(ledger)).map(words => words[0])).toEqual(['fallback-applies WELCH', 'planned-method-stands'])
  })

  it('has a memo that the monitor downloads and pdfsig accepts', async () => {
    const params = { studyId: studies['LARKMOOR-204']! }
    let issued: MemoSummary | undefined
    for (let attempt = 0; attempt < 100 && !issued; attempt++) {
      const { memos } = await sunniva.call(listMemosOperation, { params })
      issued = memos.find(({ state }) => state === 'issued')
      if (!issued) await new Promise(resolve => setTimeout(resolve, 200))
    }
    expect(issued).toMatchObject({ analysis: 'hs-CRP', binding: true })
    const response = await sunniva.send(downloadMemoOperation, { params: { ...params, memoId: issued!.id } })
    const folder = mkdtempSync(join(tmpdir(), 'stipule-demo-'))
    try {
      writeFileSync(join(folder, 'memo.pdf'), Buffer.from(await response.arrayBuffer()))
      expect(execFileSync('pdfsig', [join(folder, 'memo.pdf')], { encoding: 'utf8' })).toMatch(/Signature is Valid[\s\S]*Total document signed|Total document signed[\s\S]*Signature is Valid/)
    }
    finally {
      rmSync(folder, { recursive: true })
    }
  })
})
