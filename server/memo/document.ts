import type { Attachment, Content, TDocumentDefinitions } from 'pdfmake/interfaces'
import type { MemoContent, MemoSignature } from '../../shared/memo/content'
import { footerOf, headerOf } from './furniture'
import { blindingSection, courseSection } from './sections/course'
import { dataSection } from './sections/data'
import { findingsSection } from './sections/findings'
import { opening } from './sections/opening'
import { orderSection } from './sections/order'
import { informedSection, settlementSection } from './sections/people'
import { picturesSection } from './sections/pictures'
import { proofSection } from './sections/proof'
import { registeredSection } from './sections/registered'
import { MARGINS, STYLES } from './styles'
import type { Say } from './words'

/** Share of the text height below which no heading begins. */
const LOWEST_HEADING = 0.9

export interface SignedMemo {
  readonly content: MemoContent
  /** The canonical bytes that were signed; attached as they are. */
  readonly bytes: Uint8Array
  readonly signature: MemoSignature
}

const pages = (content: MemoContent, signature: MemoSignature, say: Say): Content[] => [
  ...opening(content, signature.at, say),
  ...registeredSection(content, say),
  ...dataSection(content, say),
  ...findingsSection(content, say),
  ...picturesSection(content, say),
  ...orderSection(content, say),
  ...courseSection(content, say),
  ...blindingSection(content, say),
  ...informedSection(content, say),
  ...settlementSection(content, say),
  ...proofSection(content, signature, say),
]

/** These reach the file too, though the types of pdfmake do not name them. */
type AttachedFile = Attachment & { readonly type: string, readonly relationship: 'Data', readonly creationDate: Date, readonly modifiedDate: Date }

const attachment = (bytes: Uint8Array, at: Date, say: Say): AttachedFile => ({
  src: `data:application/json;base64,${Buffer.from(bytes).toString('base64')}`,
  name: 'memo.json', type: 'application/json', description: say('memo.file.attachment'), relationship: 'Data', creationDate: at, modifiedDate: at,
})

/**
 * The memo as a document: A4, our faces embedded, the signed content attached. The file's own properties name
 * study and memo number only.
 */
export function memoDocument({ content, bytes, signature }: SignedMemo, say: Say): TDocumentDefinitions {
  const at = new Date(signature.at)
  return {
    version: '1.7',
    language: content.locale,
    displayTitle: true,
    info: {
      title: say('memo.header.memo', { study: content.study.protocolNumber, number: content.number }),
      subject: say('memo.file.subject'), creator: 'Stipule', producer: 'Stipule', creationDate: at, modDate: at,
    },
    files: { memo: attachment(bytes, at, say) },
    pageSize: 'A4',
    pageMargins: MARGINS,
    styles: STYLES,
    defaultStyle: STYLES.body,
    header: headerOf(content, say),
    footer: footerOf(content, signature, say),
    content: pages(content, signature, say),
    // A heading near the foot of a page belongs to what follows on the next one.
    pageBreakBefore: ({ headlineLevel, startPosition }) => headlineLevel !== undefined && startPosition.verticalRatio > LOWEST_HEADING,
  }
}
