// @ts-check
import { join, resolve } from 'node:path'
import { fileURLToPath } from 'node:url'
import { requireBuild } from './build.mjs'
import { requireDependencies } from './dependencies.mjs'
import { run } from './processes.mjs'
import { main, Refusal } from './say.mjs'
import { makeDataDir } from './secrets.mjs'

/** Command-line entries of the build. */
const ENTRIES = ['check']

const root = fileURLToPath(new URL('..', import.meta.url)).replace(/\/$/, '')
const dataDir = resolve(process.env.STIPULE_DATA_DIR || join(root, '.data'))
const [entry = '', ...args] = process.argv.slice(2)

/** Prepares what is missing, says so on standard error alone, and hands over: paths stay relative to the caller. */
await main(async (signal) => {
  if (!ENTRIES.includes(entry)) throw new Refusal(`There is no command "${entry}". There are: ${ENTRIES.join(', ')}.`)
  makeDataDir(dataDir)
  const logDir = join(dataDir, 'logs')
  await requireDependencies({ root, logDir, signal })
  await requireBuild({ root, logDir, lockFile: join(dataDir, 'build.lock'), signal })
  const { code } = await run({ command: process.execPath, args: [join(root, '.output/server', `${entry}.mjs`), ...args], cwd: process.env.INIT_CWD ?? process.cwd(), output: 'terminal', signal })
  return code
})
