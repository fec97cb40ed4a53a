import type { Content, TableCell } from 'pdfmake/interfaces'
import type { MemoSignature } from '../../shared/memo/content'
import { plain, ruled } from './styles'
import { grouped, momentWords, type Say } from './words'

export const heading = (text: string): Content => ({ text, style: 'heading', headlineLevel: 1 })
export const subheading = (text: string): Content => ({ text, style: 'subheading', headlineLevel: 2 })
export const paragraph = (text: string): Content => ({ text, margin: [0, 0, 0, 4] })

/** A hash, breakable, in the face for code. */
export const hashText = (hash: string): Content => ({ text: grouped(hash), style: 'code' })

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
    dontBreakRows: true,
    widths: [...widths],
    body: [head.map(cell => typeof cell === 'string' ? { text: cell, style: 'head' } : cell), ...body.map(row => [...row])],
  },
  layout: ruled,
})

/** Name, role, meaning, moment and hash: what a signature must show wherever its record is reproduced. */
export const signatureRows = (signatures: readonly MemoSignature[], say: Say): Content => ruledTable(
  [116, 128, 96, '*'],
  [say('memo.signature.name'), say('memo.signature.meaning'), say('memo.signature.moment'), say('memo.signature.hash')],
  signatures.map(({ name, role, meaning, at, hash }) => [
    { stack: [name, { text: say(`access.roles.${role}`), style: 'small' }] },
    say(`memo.meaning.${meaning}`),
    momentWords(at, say),
    hashText(hash),
  ]),
)
