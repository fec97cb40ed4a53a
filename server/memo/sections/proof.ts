import type { Content } from 'pdfmake/interfaces'
import type { MemoContent, MemoSignature } from '../../../shared/memo/content'
import { facts, hashText, heading, signatureRows } from '../blocks'
import type { Say } from '../words'

/** Where the settlement stands in the record, and how a reader checks all of it without this application. */
export function proofSection({ record, engine }: MemoContent, signature: MemoSignature, say: Say): Content[] {
  const { entry, treeHead, inclusionProof } = record
  return [
    heading(say('memo.heading.proof')),
    facts([
      [say('memo.fact.engine'), engine],
      [say('memo.fact.recordEntry'), { stack: [say('memo.record.entry', { sequence: entry.sequence }), hashText(entry.hash)] }],
      [say('memo.fact.treeHead'), { stack: [say('memo.record.treeHead', { size: treeHead.size }), hashText(treeHead.root)] }],
      [say('memo.fact.proof'), inclusionProof.length === 0 ? say('memo.record.noProof') : { stack: inclusionProof.map(hashText) }],
    ]),
    { ol: ['signature', 'content', 'record', 'recompute'].map(step => ({ text: say(`memo.verify.${step}`), margin: [0, 0, 0, 2] })), margin: [0, 8, 0, 0] },
    heading(say('memo.heading.signature')),
    { stack: [signatureRows([signature], say), { text: say('memo.signature.law'), style: 'small', margin: [0, 5, 0, 0] }], unbreakable: true },
  ]
}
