import { pino } from 'pino'
import { driverCode } from './database/failures'

/** One line of JSON per event on standard output; no bodies, no names, no addresses, no SQL. */
export const log = pino({ level: process.env.STIPULE_LOG_LEVEL ?? 'info', base: null, timestamp: pino.stdTimeFunctions.isoTime })

/** An error as it may be logged: kind, code and where, but not its text, which can quote values and SQL. */
export function errorFacts(error: unknown) {
  if (!(error instanceof Error)) return { kind: typeof error }
  const cause = error.cause instanceof Error ? error.cause : null
  return {
    kind: error.name,
    code: driverCode(error) ?? undefined,
    cause: cause?.name,
    stack: frames(cause ?? error),
  }
}

const frames = (error: Error) => error.stack?.split('\n').filter(line => /^\s+at /.test(line)).slice(0, 12).map(line => line.trim())
