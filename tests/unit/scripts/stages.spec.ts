import { afterEach, beforeEach, describe, expect, it, vi } from 'vitest'
import { ONE_PASSED } from '../../../scripts/counts.mjs'
import { Refusal } from '../../../scripts/say.mjs'
import { chosenStages, Stages } from '../../../scripts/stages.mjs'

const all = ['lint', 'unit', 'long']
const chosen = (...args: string[]) => [...chosenStages(args, ['lint', 'unit'], all)]

describe('chosenStages', () => {
  it('takes the usual ones unless some are named', () => {
    expect(chosen()).toEqual(['lint', 'unit'])
    expect(chosen('--only', 'long')).toEqual(['long'])
    expect(chosen('--only', 'unit,lint')).toEqual(['unit', 'lint'])
  })

  it.each([[['--only', 'untt']], [['--only']], [['--only', ',']], [['--onyl', 'unit']], [['unit']], [['--only', 'unit', 'lint']]])('refuses %j', (args) => {
    expect(() => chosen(...args)).toThrow('lint,unit,long')
  })
})

describe('Stages', () => {
  beforeEach(() => void vi.spyOn(process.stderr, 'write').mockReturnValue(true))
  afterEach(() => vi.restoreAllMocks())

  const stages = (signal = new AbortController().signal) => new Stages(new Set(['one', 'two']), signal)

  it('runs what is wanted, and goes on after one that throws', async () => {
    const run = stages()
    await run.run('one', () => Promise.reject(new Refusal('broken')))
    await run.run('other', () => Promise.reject(new Error('must not run')))
    await run.run('two', async () => ONE_PASSED)
    expect(run.done.map(({ name, count }) => [name, count.passed, count.failed])).toEqual([['one', 0, 1], ['two', 1, 0]])
  })

  it('tells whether a required stage has passed', async () => {
    expect(await stages().require('build', async () => ONE_PASSED)).toBe(true)
    expect(await stages().require('build', () => Promise.reject(new Refusal('broken')))).toBe(false)
  })

  it('ends when the person wants an end, without calling it a failure', async () => {
    const stopping = new AbortController()
    const run = stages(stopping.signal)
    stopping.abort(new Error('stopped'))
    await expect(run.run('one', () => Promise.reject(new Error('killed')))).rejects.toThrow('stopped')
    expect(run.done).toEqual([])
  })
})
