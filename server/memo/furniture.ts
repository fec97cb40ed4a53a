import type { Content, DynamicContent } from 'pdfmake/interfaces'
import type { MemoContent, MemoSignature } from '../../shared/memo/content'
import { brandMark } from './marks'
import { INK, MARGINS, TEXT_WIDTH } from './styles'
import { roleWords } from './terms'
import { momentWords, type Say } from './words'

const line = (ink: string): Content => ({
  canvas: [{ type: 'line', x1: 0, y1: 0, x2: TEXT_WIDTH, y2: 0, lineWidth: 0.5, lineColor: ink }],
})

/** On every page: mark and name at the left, study and memo number at the right. */
export const headerOf = ({ study, number }: MemoContent, say: Say): DynamicContent => () => ({
  margin: [MARGINS[0], 34, MARGINS[2], 0],
  stack: [
    {
      columns: [
        { stack: [brandMark(14)], width: 14 },
        { text: say('memo.header.product'), style: 'brand', width: 'auto', margin: [0, -1, 0, 0] },
        { text: say('memo.header.memo', { study: study.protocolNumber, number }), style: 'soft', alignment: 'right', width: '*', margin: [0, 3, 0, 0] },
      ],
      columnGap: 5,
    },
    { stack: [line(INK.rule)], margin: [0, 5, 0, 0] },
  ],
})

/** The signature of the memo as every page shows it: who, as what, meaning, when, over which bytes. */
const manifestation = (signature: MemoSignature, say: Say): Content => ({
  text: [
    { text: say('memo.footer.signedBy', { name: signature.name, role: roleWords(signature.role, say) }), bold: true, color: INK.ink },
    { text: ` ${say(`memo.meaning.${signature.meaning}`)} · ${momentWords(signature.at, say)}` },
  ],
})

/** On every page: signature, hash of what was signed, place in the record, caution, page number. */
export const footerOf = (memo: MemoContent, signature: MemoSignature, say: Say): DynamicContent => (page, pages) => ({
  margin: [MARGINS[0], 14, MARGINS[2], 0],
  style: 'footer',
  stack: [
    line(INK.rule),
    {
      margin: [0, 5, 0, 0],
      columns: [
        { width: '*', stack: [
          manifestation(signature, say),
          { text: [`${say('memo.footer.content')} `, { text: signature.hash, style: 'footerCode' }] },
          { text: [`${say('memo.footer.record', { size: memo.record.treeHead.size })} `, { text: memo.record.treeHead.root, style: 'footerCode' }] },
        ] },
        { width: 'auto', text: say('memo.footer.page', { page, pages }), alignment: 'right' },
      ],
      columnGap: 12,
    },
    { text: say('memo.caution'), margin: [0, 4, 0, 0], color: INK.caution },
  ],
})
