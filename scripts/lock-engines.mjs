// @ts-check

/** @typedef {readonly [major: number, minor: number, patch: number]} Version */

/**
 * One comparison of a range; `given` tells how many numbers of the bound were written (`20.x` has one).
 *
 * @typedef {{ operator: string, bound: Version, given: number }} Comparison
 */

/**
 * Reads what packages write into `engines`: comparisons joined by blanks, caret, tilde, wildcards, hyphen ranges.
 *
 * @param {string} text one alternative of a range.
 * @returns {Comparison[]}
 */
function comparisons(text) {
  const joined = text.trim().replace(/^(\S+)\s+-\s+(\S+)$/, '>=$1 <=$2').replace(/([<>=^~])\s+/g, '$1')
  return joined.split(/\s+/).filter(part => part !== '').map((part) => {
    const [, operator = '', numbers = ''] = /^([<>=^~]*)v?(.*)$/.exec(part) ?? []
    const written = /^[\d.]*/.exec(numbers)?.[0].split('.').filter(number => number !== '').map(Number) ?? []
    return { operator, bound: [written[0] ?? 0, written[1] ?? 0, written[2] ?? 0], given: written.length }
  })
}

/** @param {Version} one @param {Version} other @returns {number} negative, zero or positive. */
const compare = (one, other) => one[0] - other[0] || one[1] - other[1] || one[2] - other[2]

/**
 * @param {Version} version
 * @param {Comparison} comparison
 */
function fulfils(version, { operator, bound, given }) {
  const order = compare(version, bound)
  /** @param {number} places */
  const agree = places => version.slice(0, places).every((number, place) => number === bound[place])
  switch (operator) {
    case '>=': return order >= 0
    case '>': return order > 0 && !agree(given)
    case '<=': return order <= 0 || agree(given)
    case '<': return order < 0
    case '^': return order >= 0 && agree(bound[0] > 0 ? 1 : Math.min(given, bound[1] > 0 ? 2 : 3))
    case '~': return order >= 0 && agree(Math.min(given, 2))
    default: return agree(given)
  }
}

/**
 * Whether a range of `engines.node` allows a version.
 *
 * @param {string} range
 * @param {Version} version
 */
export function allows(range, version) {
  return range.split('||').some(alternative => comparisons(alternative).every(comparison => fulfils(version, comparison)))
}

/**
 * What the lock file must not have: packages that refuse the least Node.js we promise, and download addresses.
 *
 * @param {{ packages: Record<string, { engines?: { node?: string }, resolved?: string }> }} lock
 * @param {Version} least
 * @returns {string[]} one sentence per fault.
 */
export function lockFaults({ packages }, least) {
  return Object.entries(packages).flatMap(([folder, { engines, resolved }]) => [
    ...engines?.node && !allows(engines.node, least) ? [`${folder} wants Node.js ${engines.node}.`] : [],
    ...resolved === undefined ? [] : [`${folder} has a field "resolved".`],
  ])
}
