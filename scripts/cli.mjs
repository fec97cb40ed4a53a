// @ts-check
import { join } from 'node:path'
import { fileURLToPath } from 'node:url'
import { requireBuild } from './build.mjs'
import { requireDependencies, requireNode } from './dependencies.mjs'
import { run } from './processes.mjs'
import { main, Refusal } from './say.mjs'

/** Command-line entries of the build. */
const ENTRIES = ['check']

const root = fileURLToPath(new URL('..', import.meta.url))
const [entry = '', ...args] = process.argv.slice(2)

/** Where the person stands; npm runs scripts in the folder of package.json. */
const caller = process.env.npm_lifecycle_event === entry ? process.env.INIT_CWD : undefined

/** Prepares what is missing, says so on standard error alone, and hands over. */
await main(async (signal) => {
  if (!ENTRIES.includes(entry)) throw new Refusal(`There is no command "${entry}". There are: ${ENTRIES.join(', ')}.`)
  requireNode()
  await requireDependencies({ root, signal })
  await requireBuild({ root, signal })
  const program = join(root, '.output/server', `${entry}.mjs`)
  const { code } = await run({ command: process.execPath, args: [program, ...args], cwd: caller ?? process.cwd(), output: 'terminal', signal })
  return code
})
