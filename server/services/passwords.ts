import { randomBytes } from 'node:crypto'
import { hash, verify } from '@node-rs/argon2'

/** Cost of argon2id, the function's default variant: 19 MiB, two passes, one lane (OWASP Password Storage Cheat Sheet). */
const COST = { memoryCost: 19_456, timeCost: 2, parallelism: 1 }

/** @returns argon2id in PHC string form, salted. */
export const hashPassword = (password: string): Promise<string> => hash(password, COST)

let decoy: Promise<string> | undefined

/**
 * Whether a password belongs to a stored hash. Without a stored hash the same work is done against a hash of
 * random bytes, so that time does not tell which accounts exist.
 */
export async function verifyPassword(stored: string | null, password: string): Promise<boolean> {
  decoy ??= hashPassword(randomBytes(24).toString('base64'))
  const matches = await verify(stored ?? await decoy, password)
  return stored !== null && matches
}
