import { existsSync, mkdtempSync, readFileSync, rmSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { afterEach, beforeEach, describe, expect, it } from 'vitest'
import { run, runQuietly, startService } from '../../../scripts/processes.mjs'

const shell = (script: string) => ({ command: 'sh', args: ['-c', script] })
const pause = (ms: number) => new Promise(resolve => setTimeout(resolve, ms))

async function until(holds: () => boolean): Promise<void> {
  for (let attempt = 0; attempt < 200 && !holds(); attempt++) await pause(10)
  expect(holds()).toBe(true)
}

/** Whether a process runs; one that has ended but was not yet asked about does not. */
function runs(pid: number): boolean {
  try {
    return !/^\d+ \(.*\) [ZX]/.test(readFileSync(`/proc/${pid}/stat`, 'utf8'))
  }
  catch {
    return false
  }
}

describe('programs', () => {
  let folder: string
  let log: string
  beforeEach(() => {
    folder = mkdtempSync(join(tmpdir(), 'stipule processes '))
    log = join(folder, 'logs/program.log')
  })
  afterEach(() => rmSync(folder, { recursive: true }))

  it('tell their exit code and their output', async () => {
    expect(await run({ ...shell('cat; echo error >&2; exit 3'), input: 'given', output: 'collect' })).toEqual({ code: 3, text: 'givenerror\n' })
    expect((await run({ ...shell('kill -TERM $$'), output: 'collect' })).code).toBe(143)
    await expect(run({ command: join(folder, 'none'), args: [], output: 'collect' })).rejects.toThrow('ENOENT')
  })

  it('are quiet unless they fail; then the end of their log is shown', async () => {
    await runQuietly({ ...shell('echo fine'), what: 'Nothing', log })
    const failing = runQuietly({ ...shell('seq 30; exit 2'), what: 'Counting', log })
    await expect(failing).rejects.toThrow(/^Counting failed with exit code 2[^]*logs\/program\.log:\n {4}11\n[^]* {4}30$/)
    expect(readFileSync(`${log}.previous`, 'utf8')).toBe('fine\n')
  })

  it('end with all that they have started when an end is wanted, or when they take too long', async () => {
    const forking = shell(`sleep 60 & echo $! > '${folder}/pid'; wait`)
    const startedPid = () => Number(readFileSync(join(folder, 'pid'), 'utf8'))
    const stopping = new AbortController()
    const running = run({ ...forking, output: 'collect', signal: stopping.signal })
    await until(() => existsSync(join(folder, 'pid')) && startedPid() > 0)
    stopping.abort(new Error('stopped'))
    await expect(running).rejects.toThrow('stopped')
    await until(() => !runs(startedPid()))

    expect((await run({ ...forking, output: 'collect', minutes: 0.005 })).code).toBe(143)
    await until(() => !runs(startedPid()))
  })

  it('that go on are stopped when asked, and by force when they do not listen', async () => {
    const polite = startService({ name: 'polite', ...shell('trap "echo bye; exit 0" TERM; echo hears; while :; do sleep 0.02; done'), log })
    await until(() => readFileSync(log, 'utf8') === 'hears\n')
    await polite.stop()
    expect(await polite.ended).toMatchObject({ name: 'polite', code: 0 })
    expect(readFileSync(log, 'utf8')).toBe('hears\nbye\n')

    const deaf = startService({ name: 'deaf', ...shell('trap "" TERM; echo hears; while :; do sleep 0.02; done'), log, patience: 0.2 })
    await until(() => readFileSync(log, 'utf8') === 'hears\n')
    await deaf.stop()
    expect((await deaf.ended).code).toBe(137)
  })

  it('that go on tell when they have ended by themselves', async () => {
    expect(await startService({ name: 'short', ...shell('exit 7'), log }).ended).toEqual({ name: 'short', code: 7, log })
    expect((await startService({ name: 'none', command: join(folder, 'none'), args: [], log }).ended).code).toBe(127)
  })
})
