import pdfmake from 'pdfmake'
import { memoDocument, type SignedMemo } from './document'
import { memoFonts } from './fonts'
import type { MemoKeys } from './keys'
import { signPdf } from './signPdf'
import type { Say } from './words'

/** Lays out a memo. Nothing is fetched, and no file but our fonts is opened. */
async function layOut(memo: SignedMemo, say: Say): Promise<Buffer> {
  const fonts = memoFonts()
  const files = new Set(Object.values(fonts).flatMap(faces => Object.values(faces)))
  pdfmake.setFonts(fonts)
  pdfmake.setUrlAccessPolicy(() => false)
  pdfmake.setLocalAccessPolicy(path => files.has(path))
  return Buffer.from(await pdfmake.createPdf(memoDocument(memo, say)).getBuffer())
}

/**
 * The memo as a signed PDF: pages, attached content, then a detached CMS signature over the whole file, so that
 * one changed byte makes it invalid.
 */
export async function renderMemo(memo: SignedMemo, keys: MemoKeys, say: Say): Promise<Buffer> {
  const pdf = await layOut(memo, say)
  return signPdf(pdf, keys, {
    reason: say('memo.file.reason', { name: memo.signature.name }),
    name: say('memo.file.signer'),
    signingTime: new Date(memo.signature.at),
  })
}
