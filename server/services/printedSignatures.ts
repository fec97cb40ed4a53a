import type { MemoSignature } from '../../shared/memo/content'
import type { StudyId } from '../../shared/schemas/ids'
import type { Queryable } from '../database/client'
import { signatureById, signaturesOver } from './signatures'

type Shown = Awaited<ReturnType<typeof signatureById>>

const printed = ({ name, role, meaning, signedAt, hash }: Shown): MemoSignature => ({ name, role, meaning, at: signedAt.toISOString(), hash })

/** One signature as a memo prints it. */
export const printedSignature = async (db: Queryable, at: { studyId: StudyId, signatureId: string }): Promise<MemoSignature> =>
  printed(await signatureById(db, at))

/** The signatures that stand over a subject as it is now, oldest first. */
export async function printedSignatures(db: Queryable, at: { studyId: StudyId, subject: string, hash: string }): Promise<MemoSignature[]> {
  const shown = await signaturesOver(db, at)
  return shown.filter(({ status, meaning }) => status === 'valid' && meaning !== 'returned').map(printed)
}
