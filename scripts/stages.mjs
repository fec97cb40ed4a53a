// @ts-check
import { ONE_FAILED } from './counts.mjs'
import { Refusal, say } from './say.mjs'

/** @typedef {import('./counts.mjs').Count} Count */

/**
 * What the command line asks for.
 *
 * @param {readonly string[]} args such as `['--only', 'unit,api']`
 * @param {readonly string[]} usual stages that are run when none are named.
 * @param {readonly string[]} all
 * @returns {ReadonlySet<string>} names of stages.
 * @throws {Refusal} for what it does not know, because a misspelled stage must not look like a passed one.
 */
export function chosenStages(args, usual, all) {
  const [option, list = '', ...more] = args
  if (option === undefined) return new Set(usual)
  const names = list.split(',').filter(Boolean)
  const unknown = names.filter(name => !all.includes(name))
  if (option !== '--only' || more.length > 0 || names.length === 0 || unknown.length > 0) {
    throw new Refusal(`Not understood: ${args.join(' ')}. Say --only with one or more of ${all.join(',')}`)
  }
  return new Set(names)
}

/** Stages that are run one after the other, and what came of each. */
export class Stages {
  /** @type {import('./counts.mjs').Done[]} */
  done = []

  /** @param {ReadonlySet<string>} chosen @param {AbortSignal} signal */
  constructor(chosen, signal) {
    this.chosen = chosen
    this.signal = signal
  }

  /** @param {...string} names */
  wants(...names) {
    return names.some(name => this.chosen.has(name))
  }

  /**
   * Runs a stage if it is wanted. One that throws counts as one failure, and the next one has its turn.
   *
   * @param {string} name
   * @param {() => Promise<Count>} work
   */
  async run(name, work) {
    if (this.wants(name)) await this.require(name, work)
  }

  /**
   * Runs a stage that others need.
   *
   * @param {string} name
   * @param {() => Promise<Count>} work
   * @returns {Promise<boolean>} whether it passed.
   */
  async require(name, work) {
    say(`\n— ${name}`)
    const started = Date.now()
    const count = await work().catch((error) => {
      this.signal.throwIfAborted()
      say(error instanceof Refusal ? error.message : String(error?.stack ?? error))
      return ONE_FAILED
    })
    this.done.push({ name, seconds: (Date.now() - started) / 1000, count })
    return count.failed === 0
  }
}
