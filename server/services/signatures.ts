import { and, asc, eq, sql } from 'drizzle-orm'
import type { SignatureView } from '../../shared/contract/parts'
import { canonicalBytes, sha256 } from '../../shared/record/canonical'
import type { StudyId } from '../../shared/schemas/ids'
import type { Queryable, Transaction } from '../database/client'
import { newId } from '../database/newId'
import { onlyRow } from '../database/onlyRow'
import { person } from '../database/schema/person'
import { signature } from '../database/schema/record'
import { DomainError } from '../domainError'
import { verifyPassword } from './passwords'
import type { Viewer } from './viewer'

/** Identifier and password again, at every signing. */
export interface Credentials {
  readonly identifier: string
  readonly password: string
}

interface Signing extends Credentials {
  readonly studyId: StudyId
  readonly viewer: Viewer
  /** What the signature means; worded under `record.meanings.<meaning>`. */
  readonly meaning: string
  /** Id of what is signed. */
  readonly subject: string
  readonly reason?: string | null
}

/** Exactly what is signed: its hash, or the content to be hashed in its canonical form. */
type Signed = { readonly hash: string } | { readonly content: unknown }

async function reauthenticate(tx: Transaction, { viewer, identifier, password }: Signing): Promise<void> {
  const [row] = await tx.select({ email: person.email, passwordHash: person.passwordHash, deactivatedAt: person.deactivatedAt })
    .from(person).where(eq(person.id, viewer.person.id))
  const same = await verifyPassword(row?.passwordHash ?? null, password)
  const own = row?.email === identifier.trim().toLowerCase()
  if (!row || !same || !own || row.deactivatedAt !== null) throw new DomainError('signature-refused')
}

/**
 * Signs: the signer identifies again, and the signature commits with whatever else the transaction writes.
 * Failures are counted and recorded by the route (`signedOperation`), outside the transaction that they undo.
 *
 * @throws {DomainError} `signature-refused`; `not-permitted` for administrators, who never sign.
 */
export async function sign(tx: Transaction, signing: Signing & Signed): Promise<{ id: string, hash: string }> {
  const { viewer: { person: { id: personId, name }, standing, request }, studyId, meaning, subject, reason = null } = signing
  if (standing.installationRole !== null || standing.studyRoles.length === 0) throw new DomainError('not-permitted')
  await reauthenticate(tx, signing)
  const hash = 'hash' in signing ? signing.hash : sha256(canonicalBytes(signing.content))
  const row = onlyRow(await tx.insert(signature).values({
    id: newId(), studyId, personId, name, role: standing.studyRoles.join(' '), meaning, subject, hash, reason, requestId: request.requestId,
    signedAt: sql`date_trunc('milliseconds', clock_timestamp())`,
  }).returning({ id: signature.id }))
  return { id: row.id, hash }
}

type SignatureRow = typeof signature.$inferSelect
type Shown = Omit<SignatureView, 'signedAt'> & { readonly signedAt: Date }

const shown = ({ name, role, meaning, signedAt, hash, reason }: SignatureRow, status: SignatureView['status']): Shown =>
  ({ name, role, meaning, signedAt, hash, reason, status })

/**
 * Signatures over a subject, oldest first. With the hash of what the subject is now, a signature over anything
 * else reads `void`.
 */
export async function signaturesOver(db: Queryable, { studyId, subject, hash }: { studyId: StudyId, subject: string, hash?: string | null }): Promise<Shown[]> {
  const rows = await db.select().from(signature).where(and(eq(signature.studyId, studyId), eq(signature.subject, subject))).orderBy(asc(signature.signedAt))
  return rows.map(row => shown(row, hash === undefined || hash === row.hash ? 'valid' : 'void'))
}

/** One signature by its id. @throws {DomainError} `not-found` when the study has none of that id. */
export async function signatureById(db: Queryable, { studyId, signatureId }: { studyId: StudyId, signatureId: string }): Promise<Shown> {
  const [row] = await db.select().from(signature).where(and(eq(signature.studyId, studyId), eq(signature.id, signatureId)))
  if (!row) throw new DomainError('not-found')
  return shown(row, 'valid')
}
