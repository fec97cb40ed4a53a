import { detailHash, entryHash, fieldCommitment, NO_PREVIOUS, type DetailField, type EntryHead } from './entry'

/** An entry as it is stored or exported. A withheld field keeps its commitment alone. */
export interface RecordEntry {
  readonly head: EntryHead
  readonly hash: string
  readonly detail: Readonly<Record<string, DetailField | { readonly commitment: string }>>
}

export const CHAIN_FAULTS = ['gap', 'wrong-chain', 'broken-link', 'head-changed', 'detail-changed'] as const
export type ChainFault = typeof CHAIN_FAULTS[number]

export interface ChainVerdict {
  readonly size: number
  /** The first entry that does not hold, or null. */
  readonly fault: { readonly seq: number, readonly code: ChainFault } | null
}

const commitmentsOf = ({ detail }: RecordEntry) => Object.entries(detail)
  .map(([field, entry]) => 'commitment' in entry ? entry.commitment : fieldCommitment(field, entry))

function faultOf(entry: RecordEntry, before: RecordEntry | null, chain: string): ChainFault | null {
  if (entry.head.chain !== chain) return 'wrong-chain'
  if (entry.head.seq !== (before?.head.seq ?? 0) + 1) return 'gap'
  if (entry.head.previousHash !== (before?.hash ?? NO_PREVIOUS)) return 'broken-link'
  if (entry.hash !== entryHash(entry.head)) return 'head-changed'
  return entry.head.detailHash === detailHash(commitmentsOf(entry)) ? null : 'detail-changed'
}

/** Checks a whole chain from its first entry; stops at the first fault. */
export function verifyChain(chain: string, entries: Iterable<RecordEntry>): ChainVerdict {
  let before: RecordEntry | null = null
  for (const entry of entries) {
    const code = faultOf(entry, before, chain)
    if (code) return { size: before?.head.seq ?? 0, fault: { seq: entry.head.seq, code } }
    before = entry
  }
  return { size: before?.head.seq ?? 0, fault: null }
}
