// @ts-check
import { join } from 'node:path'
import { fileURLToPath } from 'node:url'
import { requireBuild } from './build.mjs'
import { check, lockCheck, migrationCheck, typeCheck, vitest } from './checks.mjs'
import { closingLine, ONE_PASSED, table, total } from './counts.mjs'
import { requireDependencies, requireNode, tool } from './dependencies.mjs'
import { requirePackages } from './packages.mjs'
import { main, Refusal, say } from './say.mjs'
import { makeDataDir } from './secrets.mjs'
import { chosenStages, Stages } from './stages.mjs'
import { startTestInstallation } from './test-installation.mjs'

const QUICK = ['lock', 'lint', 'types', 'dead-code', 'migrations', 'unit', 'reference', 'component', 'build', 'demo', 'api', 'browser']
const LONG = ['regeneration', 'long']
/** Stages that need the built programs. */
const SERVED = ['demo', 'api', 'browser', 'long']

const root = fileURLToPath(new URL('..', import.meta.url))
const logDir = join(root, '.data/logs/test')

/** @typedef {import('./checks.mjs').Setting} Setting */

/** Tests never touch an installation of the person who runs them. */
function forgetSettings() {
  for (const name of Object.keys(process.env)) {
    if (/^(STIPULE|AUTH|NITRO|NUXT|PG)|^(DATABASE_URL|MIGRATION_DATABASE_URL|PORT|HOST|BASE_URL)$/.test(name)) delete process.env[name]
  }
}

/**
 * What Debian packages are needed for.
 *
 * @param {Stages} stages
 * @returns {import('./packages.mjs').Purpose[]}
 */
const purposes = stages => [
  ...stages.wants(...SERVED) ? /** @type {const} */ (['start']) : [],
  ...stages.wants('unit', ...SERVED) ? /** @type {const} */ (['test']) : [],
  ...stages.wants('regeneration') ? /** @type {const} */ (['long']) : [],
]

/** @param {Stages} stages @param {Setting} setting */
async function runUnserved(stages, setting) {
  await stages.run('lock', () => lockCheck(setting))
  await stages.run('lint', () => check(setting, tool(root, 'eslint'), ['.', '--max-warnings', '0']))
  await stages.run('types', () => typeCheck(setting))
  await stages.run('dead-code', () => check(setting, tool(root, 'knip'), []))
  await stages.run('migrations', () => migrationCheck(setting))
  for (const project of ['unit', 'reference', 'component']) await stages.run(project, () => vitest(setting, project))
  await stages.run('regeneration', () => check(setting, process.execPath, ['scripts/reference/regenerate.mjs', '--check'], 30))
}

/**
 * What needs the build: without it, each of these stages has failed.
 *
 * @param {Stages} stages
 * @param {Setting} setting
 */
async function runServed(stages, setting) {
  if (!stages.wants('build', ...SERVED)) return
  const built = await stages.require('build', async () => {
    await requireBuild(setting)
    return ONE_PASSED
  })
  if (!stages.wants(...SERVED)) return
  if (!built) return failAll(stages, 'There is no build to test.')
  /** @type {import('./test-installation.mjs').TestInstallation | undefined} */
  let installation
  await stages.require('server', async () => {
    installation = await startTestInstallation(setting)
    return ONE_PASSED
  })
  if (!installation) return failAll(stages, 'There is no server to test.')
  const { env, startDemo, stop } = installation
  try {
    if (stages.wants('demo', 'api', 'browser')) await stages.require('demo', () => startDemo().then(() => ONE_PASSED))
    for (const project of ['api', 'browser']) await stages.run(project, () => vitest(setting, project, { env }))
    await stages.run('long', () => vitest(setting, 'long', { env, minutes: 40 }))
  }
  finally {
    await stop()
  }
}

/** @param {Stages} stages @param {string} why */
async function failAll(stages, why) {
  for (const name of SERVED) await stages.run(name, () => Promise.reject(new Refusal(why)))
}

await main(async (signal) => {
  requireNode()
  forgetSettings()
  const isLong = process.argv.includes('--long')
  const args = process.argv.slice(2).filter(arg => arg !== '--long')
  const chosen = chosenStages(args, isLong ? LONG : QUICK, [...QUICK, ...LONG])
  const stages = new Stages(chosen, signal)
  makeDataDir(join(root, '.data'))
  await requirePackages(purposes(stages), join(logDir, 'packages.log'))
  await requireDependencies({ root, signal })
  const setting = { root, logDir, signal }
  await runUnserved(stages, setting)
  await runServed(stages, setting)
  const sum = total(stages.done.map(({ count }) => count))
  say(`\n${table(stages.done)}\n`)
  process.stdout.write(`${closingLine(sum)}\n`)
  return sum.failed > 0 || sum.passed === 0 ? 1 : 0
})
