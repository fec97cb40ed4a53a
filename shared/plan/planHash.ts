import { canonicalBytes, sha256 } from '../record/canonical'
import type { Plan } from './schema'

/** The plan as it is hashed and signed: canonical JSON (RFC 8785) in UTF-8. */
export function planBytes(plan: Plan): Uint8Array {
  return canonicalBytes(plan)
}

/** SHA-256 of the plan's canonical bytes, hex. */
export function planHash(plan: Plan): string {
  return sha256(planBytes(plan))
}
