import { readFileSync } from 'node:fs'
import { fileURLToPath } from 'node:url'
import { describe, expect, it } from 'vitest'
import { detailHash, entryHash, fieldCommitment, NO_PREVIOUS, RECORD_FORMAT, type DetailField, type EntryHead } from '#shared/record/entry'
import { verifyChain, type RecordEntry } from '#shared/record/verifyChain'

const page = readFileSync(fileURLToPath(new URL('../../../../docs/record-format.md', import.meta.url)), 'utf8')
const example = JSON.parse(/```json record-example\n([\s\S]*?)```/.exec(page)![1]!) as { head: EntryHead, detail: Record<string, DetailField>, hash: string }

/** A chain of three entries that holds. */
function chain(): RecordEntry[] {
  const entries: RecordEntry[] = []
  for (let seq = 1; seq <= 3; seq++) {
    const detail = { number: { salt: `${seq}`.padStart(32, '0'), value: seq }, word: { salt: 'ab'.repeat(16), value: 'held' } }
    const head: EntryHead = {
      ...example.head, chain: 'c', seq, format: RECORD_FORMAT, previousHash: entries.at(-1)?.hash ?? NO_PREVIOUS,
      detailHash: detailHash(Object.entries(detail).map(([field, entry]) => fieldCommitment(field, entry))),
    }
    entries.push({ head, hash: entryHash(head), detail })
  }
  return entries
}

const withEntry = (entries: RecordEntry[], index: number, change: (entry: RecordEntry) => RecordEntry) => entries.map((entry, at) => at === index ? change(entry) : entry)

describe('record format', () => {
  it('is what the page says: the example recomputes', () => {
    expect(detailHash(Object.entries(example.detail).map(([field, entry]) => fieldCommitment(field, entry)))).toBe(example.head.detailHash)
    expect(entryHash(example.head)).toBe(example.hash)
    expect(example.head.previousHash).toBe(NO_PREVIOUS)
  })

  it('verifies a chain, also where a reader has only the commitment of a field', () => {
    expect(verifyChain('c', chain())).toEqual({ size: 3, fault: null })
    const masked = chain().map(entry => ({ ...entry, detail: { ...entry.detail, word: { commitment: fieldCommitment('word', entry.detail.word as DetailField) } } }))
    expect(verifyChain('c', masked)).toEqual({ size: 3, fault: null })
  })

  it.each<[string, number, (entries: RecordEntry[]) => RecordEntry[]]>([
    ['head-changed', 2, entries => withEntry(entries, 1, entry => ({ ...entry, head: { ...entry.head, action: 'plan.saved' } }))],
    ['head-changed', 2, entries => withEntry(entries, 1, entry => ({ ...entry, head: { ...entry.head, actor: { ...entry.head.actor, name: 'Somebody Else' } } }))],
    ['detail-changed', 2, entries => withEntry(entries, 1, entry => ({ ...entry, detail: { ...entry.detail, word: { salt: 'ab'.repeat(16), value: 'told' } } }))],
    ['detail-changed', 3, entries => withEntry(entries, 2, ({ detail: { word }, ...entry }) => ({ ...entry, detail: { word: word! } }))],
    ['gap', 3, entries => entries.filter((_, index) => index !== 1)],
    ['broken-link', 2, entries => withEntry(entries, 0, (entry) => {
      const head = { ...entry.head, action: 'plan.saved' }
      return { ...entry, head, hash: entryHash(head) }
    })],
    ['wrong-chain', 1, entries => withEntry(entries, 0, entry => ({ ...entry, head: { ...entry.head, chain: 'other' } }))],
  ])('finds %s at entry %i', (code, seq, spoil) => {
    expect(verifyChain('c', spoil(chain())).fault).toEqual({ seq, code })
  })

  it('commits to value and salt', () => {
    const salt = '00'.repeat(16)
    const commitments = [fieldCommitment('a', { salt, value: 1 }), fieldCommitment('a', { salt, value: 2 }), fieldCommitment('b', { salt, value: 1 }), fieldCommitment('a', { salt: '01'.repeat(16), value: 1 })]
    expect(new Set(commitments).size).toBe(4)
  })
})
