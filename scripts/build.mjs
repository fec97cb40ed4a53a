// @ts-check
import { existsSync, readFileSync, rmSync, writeFileSync } from 'node:fs'
import { join } from 'node:path'
import { contentHash } from './content-hash.mjs'
import { tool, whilePreparing } from './dependencies.mjs'
import { runQuietly } from './processes.mjs'
import { say } from './say.mjs'

/** Everything that the built programs are made of. */
const SOURCES = ['app', 'server', 'shared', 'public', 'drizzle', 'scripts/build', 'nuxt.config.ts', 'tailwind.config.ts', 'package-lock.json']
const MARK = '.output/.stipule-build'

/**
 * Builds the programs when they are not those of the sources.
 *
 * @param {import('./dependencies.mjs').Checkout} checkout
 */
export function requireBuild({ root, signal }) {
  return whilePreparing({ root, signal }, async () => {
    const hash = contentHash(root, { contents: SOURCES })
    const mark = join(root, MARK)
    if (existsSync(mark) && readFileSync(mark, 'utf8') === hash) return
    say('Building. This takes one or two minutes.')
    rmSync(mark, { force: true })
    await runQuietly({
      what: 'The build', command: tool(root, 'nuxt'), args: ['build'], cwd: root, signal, log: join(root, '.data/logs/build.log'),
      env: { ...process.env, NUXT_TELEMETRY_DISABLED: '1', NODE_ENV: 'production' },
    })
    writeFileSync(mark, hash)
  })
}
