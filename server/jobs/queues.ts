import type { DeviationId, ExtractId, MemoId } from '../../shared/schemas/domainIds'
import type { InvitationId, PersonId, StudyId } from '../../shared/schemas/ids'

/** What a mail is about; the worker reads the rest when it writes it, so that no text or secret stands in a job. */
export type MailJob
  = | { readonly kind: 'invitation', readonly to: PersonId, readonly invitationId: InvitationId }
    | { readonly kind: 'deviation-opened', readonly to: PersonId, readonly studyId: StudyId, readonly deviationId: DeviationId }
    | { readonly kind: 'memo-issued', readonly to: PersonId, readonly studyId: StudyId, readonly memoId: MemoId }

/** Every queue with the data of its jobs. Handlers are idempotent: a job may run twice. */
export interface Jobs {
  readonly check: { readonly studyId: StudyId, readonly extractId: ExtractId }
  readonly memo: { readonly studyId: StudyId, readonly memoId: MemoId }
  readonly mail: MailJob
}

export type Queue = keyof Jobs

/** Retried with growing pauses; `expireInSeconds` gives a job back whose worker died. */
export const QUEUES: Readonly<Record<Queue, { retryLimit: number, retryDelay: number, retryBackoff: true, expireInSeconds: number }>> = {
  check: { retryLimit: 5, retryDelay: 2, retryBackoff: true, expireInSeconds: 600 },
  memo: { retryLimit: 5, retryDelay: 2, retryBackoff: true, expireInSeconds: 300 },
  mail: { retryLimit: 8, retryDelay: 5, retryBackoff: true, expireInSeconds: 120 },
}
