#!/usr/bin/env node
// @ts-check
// Makes the reference fixtures anew with R and Python: node scripts/reference/regenerate.mjs [--check] [name...]
// --check writes nothing and fails where a committed fixture differs. Debian packages: r-base-core,
// r-cran-nortest, r-cran-car, r-cran-jsonlite, python3-mpmath.
import { spawnSync } from 'node:child_process'
import { mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { fileURLToPath } from 'node:url'

const GENERATORS = [
  { name: 'normality', command: 'Rscript', script: 'normality.R' },
  { name: 'spread', command: 'Rscript', script: 'spread.R' },
  { name: 'descriptive', command: 'Rscript', script: 'descriptive.R' },
  { name: 'distributions', command: 'Rscript', script: 'distributions.R' },
  { name: 'decision', command: 'Rscript', script: 'decision.R' },
  // Debian's interpreter, which has Debian's mpmath, rather than whichever stands first on the path.
  { name: 'exact', command: '/usr/bin/python3', script: 'exact.py' },
]
/** Other builds of the same programs may differ in the last digits. */
const TOLERANCE = 1e-12

const root = fileURLToPath(new URL('../..', import.meta.url))
const committedPath = (/** @type {string} */ name) => join(root, 'tests/reference/fixtures', `${name}.json`)

/** @returns {string} the fixture's text */
function generate(/** @type {typeof GENERATORS[number]} */ { name, command, script }, /** @type {string} */ folder) {
  const target = join(folder, `${name}.json`)
  const { status, error } = spawnSync(command, [`scripts/reference/${script}`, target], { cwd: root, stdio: ['ignore', 'inherit', 'inherit'] })
  if (error) throw error
  if (status !== 0) throw new Error(`${script} ended with status ${status}`)
  return readFileSync(target, 'utf8')
}

/**
 * Places where two parsed fixtures differ.
 * @param {unknown} found
 * @param {unknown} expected
 * @param {string} place
 * @returns {string[]}
 */
function differences(found, expected, place) {
  if (typeof found === 'number' && typeof expected === 'number') {
    return Math.abs(found - expected) <= TOLERANCE * Math.abs(expected) ? [] : [`${place}: ${found}, committed ${expected}`]
  }
  if (found === null || expected === null || typeof found !== 'object' || typeof expected !== 'object') {
    return found === expected ? [] : [`${place}: ${JSON.stringify(found)}, committed ${JSON.stringify(expected)}`]
  }
  const keys = new Set([...Object.keys(found), ...Object.keys(expected)])
  return [...keys].flatMap(key => differences(Reflect.get(found, key), Reflect.get(expected, key), `${place}.${key}`))
}

/** @returns {boolean} whether the committed fixture holds */
function check(/** @type {string} */ name, /** @type {string} */ text) {
  const { versions, ...found } = JSON.parse(text)
  const { versions: committedVersions, ...expected } = JSON.parse(readFileSync(committedPath(name), 'utf8'))
  const differing = differences(found, expected, name)
  for (const line of differing.slice(0, 20)) console.error(line)
  if (JSON.stringify(versions) !== JSON.stringify(committedVersions)) {
    console.log(`${name}: made with ${JSON.stringify(versions)}, committed with ${JSON.stringify(committedVersions)}`)
  }
  console.log(`${name}: ${differing.length === 0 ? 'as committed' : `${differing.length} differences`}`)
  return differing.length === 0
}

const names = process.argv.slice(2).filter(argument => argument !== '--check')
const checking = process.argv.includes('--check')
const chosen = GENERATORS.filter(({ name }) => names.length === 0 || names.includes(name))
const folder = mkdtempSync(join(tmpdir(), 'reference-'))
try {
  const held = chosen.map((generator) => {
    const text = generate(generator, folder)
    if (checking) return check(generator.name, text)
    writeFileSync(committedPath(generator.name), text)
    console.log(`${generator.name}: written`)
    return true
  })
  process.exitCode = held.every(Boolean) && chosen.length > 0 ? 0 : 1
}
finally {
  rmSync(folder, { recursive: true, force: true })
}
