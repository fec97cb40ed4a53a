import type { Content, TableCell } from 'pdfmake/interfaces'
import type { MemoSignature } from '../../shared/memo/content'
import { plain, ruled } from './styles'
import { roleWords } from './terms'
import { grouped, momentWords, type Say } from './words'

export const heading = (text: string): Content => ({ text, style: 'heading', headlineLevel: 1 })
export const subheading = (text: string): Content => ({ text, style: 'subheading', headlineLevel: 2 })
export const paragraph = (text: string): Content => ({ text, margin: [0, 3, 0, 4] })

/** Room above and below a block, in points. */
export const spaced = (content: Content, above: number, below = 0): Content => ({ stack: [content], margin: [0, above, 0, below] })

/** A hash, breakable, in the face for code. */
export const hashText = (hash: string): Content => ({ text: grouped(hash), style: 'code', margin: [0, 1.6, 0, 0] })

/** Names at the left, what they stand for at the right. */
export const facts = (rows: readonly (readonly [string, Content])[]): Content => ({
  table: {
    widths: [118, '*'],
    dontBreakRows: true,
    body: rows.map(([name, value]) => [{ text: name, style: 'soft' }, value] satisfies TableCell[]),
  },
  layout: plain,
})

/** A table with a head that repeats on every page it reaches. */
export const ruledTable = (widths: readonly (number | string)[], head: readonly Content[], body: readonly (readonly TableCell[])[]): Content => ({
  table: {
    headerRows: 1,
    keepWithHeaderRows: 1,
    dontBreakRows: true,
    widths: [...widths],
    body: [head.map(cell => typeof cell === 'string' ? { text: cell, style: 'head' } : cell), ...body.map(row => [...row])],
  },
  layout: ruled,
})

/** Name, role, meaning, moment and hash: what a signature must show wherever its record is reproduced. */
export const signatureRows = (signatures: readonly MemoSignature[], say: Say): Content => ruledTable(
  [104, 116, 120, '*'],
  [say('memo.signature.name'), say('memo.signature.meaning'), say('memo.signature.moment'), say('memo.signature.hash')],
  signatures.map(({ name, role, meaning, at, hash }) => [
    { stack: [name, { text: roleWords(role, say), style: 'small' }] },
    say(`memo.meaning.${meaning}`),
    momentWords(at, say),
    hashText(hash),
  ]),
)
