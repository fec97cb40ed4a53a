// @ts-check
import { existsSync, mkdirSync, readdirSync, rmSync, writeFileSync } from 'node:fs'
import { runQuietly } from './processes.mjs'
import { Refusal, say } from './say.mjs'

export const CHROMIUM = '/usr/bin/chromium'
const POSTGRESQL = '/usr/lib/postgresql'

/** Debian's settings for the cluster that it makes when PostgreSQL is installed; we make one of our own. */
const CREATE_CLUSTER = '/etc/postgresql-common/createcluster.d'

/**
 * @typedef {'start' | 'test' | 'long'} Purpose
 * @typedef {object} DebianPackage
 * @property {string} name
 * @property {Purpose} purpose the first command that needs it.
 * @property {() => boolean} present
 */

/** @param {readonly string[]} files */
const allExist = (...files) => () => files.every(file => existsSync(file))

/** @param {string} name */
const inLibraryOfR = name => () => [
  '/usr/lib/R/site-library', '/usr/lib/R/library', '/usr/local/lib/R/site-library',
].some(folder => existsSync(`${folder}/${name}/DESCRIPTION`))

/**
 * Every Debian package that a command needs beside Node.js.
 *
 * @type {readonly DebianPackage[]}
 */
const PACKAGES = [
  { name: 'postgresql', purpose: 'start', present: () => postgresqlVersions().length > 0 },
  { name: 'chromium', purpose: 'test', present: allExist(CHROMIUM) },
  { name: 'poppler-utils', purpose: 'test', present: allExist('/usr/bin/pdfsig', '/usr/bin/pdftotext', '/usr/bin/pdfdetach', '/usr/bin/pdffonts') },
  { name: 'openssl', purpose: 'test', present: allExist('/usr/bin/openssl') },
  { name: 'r-base-core', purpose: 'long', present: allExist('/usr/bin/Rscript') },
  { name: 'r-cran-nortest', purpose: 'long', present: inLibraryOfR('nortest') },
  { name: 'r-cran-car', purpose: 'long', present: inLibraryOfR('car') },
  { name: 'r-cran-jsonlite', purpose: 'long', present: inLibraryOfR('jsonlite') },
  { name: 'python3-mpmath', purpose: 'long', present: allExist('/usr/bin/python3', '/usr/lib/python3/dist-packages/mpmath/__init__.py') },
]

/**
 * Versions of PostgreSQL whose server is installed, newest first.
 *
 * @returns {string[]} such as `['17', '15']`.
 */
export function postgresqlVersions() {
  if (!existsSync(POSTGRESQL)) return []
  return readdirSync(POSTGRESQL)
    .filter(version => ['initdb', 'postgres', 'psql'].every(program => existsSync(`${binariesOf(version)}/${program}`)))
    .sort((a, b) => Number(b) - Number(a))
}

/** @param {string} version such as `15` */
export const binariesOf = version => `${POSTGRESQL}/${version}/bin`

/**
 * @param {readonly Purpose[]} purposes
 * @returns {string[]} names of what is not installed.
 */
export function missingPackages(purposes) {
  return PACKAGES.filter(({ purpose, present }) => purposes.includes(purpose) && !present()).map(({ name }) => name)
}

/** @param {readonly string[]} names */
const installArguments = names => ['-o', 'DPkg::Lock::Timeout=300', 'install', '-y', '--no-install-recommends', ...names]

/**
 * @param {readonly string[]} args
 * @param {string} log
 */
const aptGet = (args, log) => runQuietly({
  what: `apt-get ${args.find(arg => /^[a-z]+$/.test(arg))}`, command: 'apt-get', args, log, env: { ...process.env, DEBIAN_FRONTEND: 'noninteractive' },
})

/**
 * Installs packages; the lists of what Debian offers are fetched when there are none, or when they turn out to be old.
 *
 * @param {readonly string[]} names
 * @param {string} log
 */
async function install(names, log) {
  const update = () => aptGet(['-o', 'DPkg::Lock::Timeout=300', 'update'], log)
  const listed = readdirSync('/var/lib/apt/lists').some(name => name.includes('_Packages'))
  if (!listed) await update()
  try {
    await aptGet(installArguments(names), log)
  }
  catch (error) {
    if (!listed) throw error
    await update()
    await aptGet(installArguments(names), log)
  }
}

/**
 * Keeps Debian from making and starting a cluster on port 5432 while something is installed.
 *
 * @param {() => Promise<void>} work
 */
async function withoutMainCluster(work) {
  const setting = `${CREATE_CLUSTER}/stipule.conf`
  mkdirSync(CREATE_CLUSTER, { recursive: true })
  writeFileSync(setting, 'create_main_cluster = false\n')
  try {
    await work()
  }
  finally {
    rmSync(setting)
  }
}

/**
 * Sees to it that the packages are there: installs them as root, names them otherwise. An installation that has
 * begun is not interrupted.
 *
 * @param {readonly Purpose[]} purposes
 * @param {string} log
 */
export async function requirePackages(purposes, log) {
  const names = missingPackages(purposes)
  if (names.length === 0) return
  const command = `apt-get install -y --no-install-recommends ${names.join(' ')}`
  if (!existsSync('/usr/bin/apt-get')) throw new Refusal(`Missing, as Debian calls it: ${names.join(', ')}. Install it by this system's own means and start again.`)
  if (process.getuid?.() !== 0) {
    throw new Refusal(`Missing from this system: ${names.join(', ')}. This account may not install packages; an administrator can:\n\n    sudo ${command}\n\nThen start again.`)
  }
  say(`Installing from Debian's packages: ${names.join(', ')}.`)
  await withoutMainCluster(() => install(names, log))
  const still = missingPackages(purposes)
  if (still.length > 0) throw new Refusal(`apt-get has run, but ${still.join(', ')} cannot be found in the usual places.`)
}
