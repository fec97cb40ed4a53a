import type { SeenAnalysis } from '../decision/report'
import type { PlannedAnalysis } from '../plan/analysisSchema'
import type { SeenVerdict } from '../plan/terms'

/**
 * What a memo says and what its signature covers: plain data with codes, canonical (RFC 8785) before it is
 * hashed. Pages are made from it by way of the wording catalogue; the file travels inside the PDF as
 * `memo.json`. Moments are ISO 8601, UTC, with milliseconds; hashes are SHA-256, hex.
 */
export interface MemoContent {
  readonly format: 'stipule-memo/1'
  /** `blinded`: nothing in it depends on arms but released verdict words. */
  readonly edition: 'blinded' | 'open-label'
  readonly locale: 'en'
  readonly number: number
  readonly deviationClass: 'foreseen-switch' | 'departure' | 'unresolved'
  readonly binding: boolean
  readonly study: { readonly protocolNumber: string, readonly title: string, readonly sponsor: string, readonly phase: string }
  readonly plan: MemoPlan
  readonly analysis: MemoAnalysis
  readonly deviation: { readonly number: number, readonly openedAt: string }
  readonly extract: MemoExtract
  readonly verdict: MemoVerdict
  /** The analysis as everybody may see it; every figure in it is allowed to every reader of this edition. */
  readonly judged: SeenAnalysis
  readonly blinding: MemoBlinding
  /** One entry per released verdict of this deviation, oldest first. */
  readonly course: readonly MemoCourse[]
  readonly unscheduledLooks: readonly MemoUnscheduled[]
  readonly acknowledgement: MemoAcknowledgement
  readonly settlement: MemoSettlement
  readonly engine: string
  readonly record: MemoRecord
  /** No difference, ratio, location estimate or test statistic between what is compared was computed. */
  readonly contrast: 'none-computed'
}

/** A signature as it is printed. `meaning` is a code of the catalogue. */
export interface MemoSignature {
  readonly name: string
  readonly role: string
  readonly meaning: string
  readonly at: string
  /** Of exactly what was signed. */
  readonly hash: string
}

export interface MemoPlan {
  readonly version: number
  readonly protocolVersion: string
  readonly hash: string
  readonly signedAt: string
  readonly amendmentReason: string | null
  readonly declaration: { readonly firstSubjectIn: string | null, readonly dataSeen: 'none' | 'pooled' | 'by-arm' } | null
  readonly marks: readonly ('after-interim-verdicts' | 'after-exposure' | 'exploratory')[]
  readonly signatures: readonly MemoSignature[]
}

/** A step of the registered order in words: which, when, and what it relies on itself. */
export interface MemoStep { readonly head: string, readonly lines: readonly string[] }

export interface MemoAnalysis {
  /** Verbatim from the signed plan. */
  readonly registered: PlannedAnalysis
  /** The same in sentences: what is compared and how, what it relies on, what takes over in which order. */
  readonly words: {
    readonly frame: readonly string[]
    readonly prerequisites: readonly string[]
    readonly order: readonly MemoStep[]
    /** What that verdict leads to at the decision point. */
    readonly notAssessable: string
  }
  readonly endpoint: { readonly label: string, readonly unit: string }
  readonly analysisSet: string
  /** Planned arms that are compared, by their labels; empty in an analysis without arms. */
  readonly arms: readonly { readonly id: string, readonly label: string }[]
}

export interface MemoExtract {
  readonly number: number
  readonly title: string
  readonly standing: 'look' | 're-cut' | 'unscheduled' | 'decision-point'
  readonly purpose: 'interim' | 'database-lock'
  readonly cutOff: string
  readonly receivedAt: string
  readonly uploadedBy: string
  readonly rows: number
  readonly subjects: number | null
  /** Of the mapped arm-free content, sorted by key. */
  readonly contentHash: string
}

export interface MemoVerdict {
  readonly word: SeenVerdict
  readonly step: string | null
  readonly reason: string | null
  readonly setAside: string | null
  readonly changesQuestion: boolean
  readonly releasedAt: string
  /** Who signed the release; null where nobody had to. */
  readonly releasedBy: string | null
}

export type BlindStatus = 'open-label' | 'blind-holds' | 'blind-broken'

interface MemoBlinding {
  /** When the verdict was released, and when it was settled. */
  readonly atVerdict: BlindStatus
  readonly atSettlement: BlindStatus
  readonly brokenAt: string | null
}

interface MemoCourse {
  readonly extract: { readonly number: number, readonly title: string, readonly cutOff: string }
  readonly planVersion: number
  readonly verdict: { readonly word: SeenVerdict, readonly step: string | null, readonly reason: string | null }
  readonly releasedAt: string
  readonly binding: boolean
}

export interface MemoUnscheduled {
  readonly extract: number
  readonly cutOff: string
  readonly receivedAt: string
  /** Null until a biostatistician has signed why it is judged. */
  readonly reason: string | null
}

export interface MemoAcknowledgement {
  readonly state: 'awaited' | 'acknowledged' | 'declined' | 'outstanding'
  readonly dueAt: string
  /** Investigator whom the plan names; several where the role is meant, not a person. */
  readonly asked: readonly string[]
  readonly comment: string | null
  readonly signature: MemoSignature | null
}

export interface MemoSettlement {
  readonly kind: 'accept-step' | 'report-without-claim' | 'overrule'
  readonly note: string
  readonly signature: MemoSignature
  readonly second: MemoSignature | null
}

/** Where the last signature that the memo reports stands in the append-only record (RFC 9162, section 2.1). */
export interface MemoRecord {
  readonly entry: { readonly sequence: number, readonly hash: string }
  readonly treeHead: { readonly size: number, readonly root: string }
  readonly inclusionProof: readonly string[]
}
