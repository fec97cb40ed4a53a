// @ts-check

/**
 * Whether a range of `engines.node` allows a version. Understands what packages write: alternatives by `||`,
 * comparisons joined by blanks, caret, tilde, wildcards, hyphen ranges.
 *
 * @param {string} range
 * @param {readonly [number, number, number]} version
 */
export function allows(range, version) {
  return range.split('||').some(alternative => comparators(alternative.trim()).every(({ operator, bound, parts }) => holds(operator, compare(version, bound), version, bound, parts)))
}

/** @param {string} text */
function comparators(text) {
  const hyphen = /^v?([\d.]+)\s+-\s+v?([\d.]+)$/.exec(text)
  const joined = hyphen ? `>=${hyphen[1]} <=${hyphen[2]}` : text.replace(/([<>=^~]+)\s+/g, '$1')
  return joined.split(/\s+/).filter(part => part !== '' && part !== '*' && part !== 'x').map((part) => {
    const [, operator = '', numbers = ''] = /^([<>=^~]*)v?(.*)$/.exec(part) ?? []
    const given = numbers.split('-')[0]?.split('.').filter(number => /^\d+$/.test(number)).map(Number) ?? []
    return { operator, parts: given.length, bound: /** @type {[number, number, number]} */ ([given[0] ?? 0, given[1] ?? 0, given[2] ?? 0]) }
  })
}

/** @param {readonly number[]} one @param {readonly number[]} other */
function compare(one, other) {
  for (let i = 0; i < 3; i++) if (one[i] !== other[i]) return (one[i] ?? 0) - (other[i] ?? 0)
  return 0
}

/**
 * @param {string} operator @param {number} order
 * @param {readonly number[]} version @param {readonly number[]} bound @param {number} parts
 */
function holds(operator, order, version, bound, parts) {
  const same = (/** @type {number} */ places) => bound.slice(0, places).every((number, i) => version[i] === number)
  switch (operator) {
    case '>=': return order >= 0
    case '>': return parts < 3 ? order > 0 && !same(parts) : order > 0
    case '<=': return order <= 0 || same(parts)
    case '<': return order < 0
    case '^': return order >= 0 && version[0] === bound[0]
    case '~': return order >= 0 && same(Math.min(parts, 2))
    default: return same(parts)
  }
}

/**
 * What the lock file must not have: packages that refuse the least Node.js we promise, and download addresses.
 *
 * @param {{ packages?: Record<string, { engines?: { node?: string }, resolved?: string, optional?: boolean }> }} lock
 * @param {readonly [number, number, number]} least
 * @returns {string[]}
 */
export function lockFaults({ packages = {} }, least) {
  return Object.entries(packages).flatMap(([path, { engines, resolved }]) => [
    ...engines?.node && !allows(engines.node, least) ? [`${path} wants Node.js ${engines.node}`] : [],
    ...resolved?.startsWith('http') ? [`${path} names a download address`] : [],
  ])
}
