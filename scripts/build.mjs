// @ts-check
import { existsSync, readFileSync, writeFileSync } from 'node:fs'
import { join } from 'node:path'
import { contentHash } from './content-hash.mjs'
import { alone } from './locks.mjs'
import { runQuietly } from './processes.mjs'
import { say } from './say.mjs'

/** Everything that the built programs are made of. */
const SOURCES = ['app', 'server', 'shared', 'public', 'drizzle', 'scripts/build', 'nuxt.config.ts', 'tailwind.config.ts', 'package-lock.json']
const MARK = '.output/.stipule-build'

/**
 * Builds the programs when they are not those of the sources; two commands at a time build one after the other.
 *
 * @param {{ root: string, logDir: string, lockFile: string, signal: AbortSignal }} place
 */
export async function requireBuild({ root, logDir, lockFile, signal }) {
  await alone(lockFile, signal, async () => {
    const hash = contentHash(root, { contents: SOURCES })
    const mark = join(root, MARK)
    if (existsSync(mark) && readFileSync(mark, 'utf8') === hash) return
    say('Building. This takes one or two minutes.')
    await runQuietly({
      what: 'The build', command: 'npx', args: ['nuxt', 'build'], cwd: root, signal, log: join(logDir, 'build.log'),
      env: { ...process.env, NUXT_TELEMETRY_DISABLED: '1', NODE_ENV: 'production' },
    })
    writeFileSync(mark, hash)
  })
}
