/** SQLSTATE classes and codes that mean "no database just now": connection lost, shutting down, starting, full. */
const UNAVAILABLE_STATE = /^(08...|57P0[123]|53300)$/
const UNAVAILABLE_CODES = new Set([
  'ECONNREFUSED', 'ECONNRESET', 'EPIPE', 'ETIMEDOUT', 'ENOTFOUND', 'EHOSTUNREACH', 'ENETUNREACH',
  'CONNECT_TIMEOUT', 'CONNECTION_CLOSED', 'CONNECTION_ENDED', 'CONNECTION_DESTROYED',
])

interface Coded { readonly code?: unknown, readonly constraint_name?: unknown, readonly cause?: unknown }

/** The error and its causes (Drizzle wraps what the driver threw), outermost first. */
function* chainOf(error: unknown): Generator<Coded> {
  let current = error
  for (let depth = 0; depth < 8 && typeof current === 'object' && current !== null; depth++) {
    yield current
    current = (current as Coded).cause
  }
}

/** Code given by the driver, PostgreSQL or the network, if any. */
export function driverCode(error: unknown): string | null {
  for (const { code } of chainOf(error)) if (typeof code === 'string') return code
  return null
}

export function isDatabaseUnavailable(error: unknown): boolean {
  const code = driverCode(error)
  return code !== null && (UNAVAILABLE_CODES.has(code) || UNAVAILABLE_STATE.test(code))
}

/** Whether a unique constraint or index of this name refused the row. */
export function violatesUnique(error: unknown, constraint: string): boolean {
  for (const { code, constraint_name } of chainOf(error)) if (code === '23505') return constraint_name === constraint
  return false
}
