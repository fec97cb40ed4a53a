// @ts-check
import { spawnSync } from 'node:child_process'
import { createHash } from 'node:crypto'
import { chownSync, existsSync, mkdirSync, mkdtempSync, readFileSync, rmdirSync, statSync } from 'node:fs'
import { join } from 'node:path'
import { Refusal, say } from './say.mjs'

/** @typedef {import('./processes.mjs').Account} Account */

/**
 * An account of the system and its home.
 *
 * @param {string} name
 * @returns {Account & { home: string } | null}
 */
function systemAccount(name) {
  const line = readFileSync('/etc/passwd', 'utf8').split('\n').find(entry => entry.startsWith(`${name}:`))
  if (!line) return null
  const [, , uid, gid, , home = '/'] = line.split(':')
  return { uid: Number(uid), gid: Number(gid), home }
}

/** PostgreSQL refuses to run as root; as root it runs as Debian's account for it. */
function postgresAccount() {
  const account = systemAccount('postgres')
  if (!account) throw new Refusal('There is no account "postgres" on this system; PostgreSQL does not run as root. Start as an ordinary user instead.')
  return account
}

/**
 * Whether an account can reach a folder and write there.
 *
 * @param {string} folder
 * @param {Account} account
 */
function canUse(folder, account) {
  return spawnSync('test', ['-w', folder], { uid: account.uid, gid: account.gid, cwd: '/', stdio: 'ignore' }).status === 0
}

/**
 * The account that a cluster's programs must run as.
 *
 * @param {string} home an existing folder of a cluster.
 * @returns {Account | null} null: the account of this script, which is not root.
 */
export function accountOf(home) {
  if (process.getuid?.() !== 0) return null
  const { uid, gid } = statSync(home)
  return uid === 0 ? postgresAccount() : { uid, gid }
}

/**
 * Makes the folder for a cluster, which its account can reach: inside the wanted place, or below that account's
 * own home where the way is closed to it (a checkout below a folder of mode 700).
 *
 * @param {string} wanted
 * @returns {string} the folder; remember it.
 */
export function makeClusterHome(wanted) {
  if (!existsSync(wanted)) mkdirSync(wanted, { mode: 0o700 })
  if (process.getuid?.() !== 0) return wanted
  const account = postgresAccount()
  if (statSync(wanted).uid === 0) chownSync(wanted, account.uid, account.gid)
  if (canUse(wanted, accountOf(wanted) ?? account)) return wanted
  rmdirSync(wanted)
  return makeHomeElsewhere(account, wanted)
}

/**
 * @param {Account & { home: string }} account
 * @param {string} wanted
 */
function makeHomeElsewhere(account, wanted) {
  if (!canUse(account.home, account)) throw new Refusal(`The account "postgres" can use neither ${wanted} nor its own home ${account.home}. Start from a folder that it can enter, or as an ordinary user.`)
  const name = createHash('sha256').update(wanted).digest('hex').slice(0, 12)
  const home = mkdtempSync(join(account.home, `stipule-${name}-`))
  chownSync(home, account.uid, account.gid)
  say(`PostgreSQL's account cannot enter ${wanted}; its data are kept in ${home}.`)
  return home
}
