import { execFileSync } from 'node:child_process'
import { createHash } from 'node:crypto'
import { mkdtemp, readFile, rm, writeFile } from 'node:fs/promises'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import canonicalize from 'canonicalize'
import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import type { MemoContent } from '#shared/memo/content'
import { say as sayIn } from '#shared/wording/say'
import { ensureMemoKeys, readMemoKeys } from '../../../../server/memo/keys'
import { renderMemo } from '../../../../server/memo/render'
import type { Say } from '../../../../server/memo/words'
import { memoFixture, memoSignatureFixture, openFigures } from '../../../helpers/memoFixture'

const say: Say = (key, params) => sayIn('en', key, params)
const CAUTION = 'This memo judges statistical prerequisites.'

const sha256 = (bytes: Buffer) => createHash('sha256').update(bytes).digest('hex')

let folder: string
let file: string
let pdf: Buffer
const content = memoFixture(say)
const bytesOf = (of: MemoContent) => Buffer.from(canonicalize(of) ?? '')
const contentHash = sha256(bytesOf(content))

const run = (tool: string, ...options: string[]) =>
  execFileSync(tool, options, { encoding: 'utf8', stdio: ['ignore', 'pipe', 'ignore'], env: { ...process.env, LC_ALL: 'C.UTF-8' } })

/** pdfsig answers with another exit code when it finds nothing valid; only what it says counts here. */
function pdfsig(path: string): string {
  try {
    return run('pdfsig', path)
  }
  catch (error) {
    return error instanceof Error && 'stdout' in error ? String(error.stdout) : ''
  }
}

async function render(of: MemoContent): Promise<Buffer> {
  const bytes = bytesOf(of)
  return renderMemo({ content: of, bytes, signature: { ...memoSignatureFixture, hash: sha256(bytes) } }, await readMemoKeys(join(folder, 'keys')), say)
}

beforeAll(async () => {
  folder = await mkdtemp(join(tmpdir(), 'stipule-memo-'))
  file = join(folder, 'memo.pdf')
  await ensureMemoKeys(folder)
  pdf = await render(content)
  await writeFile(file, pdf)
})
afterAll(() => rm(folder, { recursive: true }))

describe('signature of the file', () => {
  it('is valid and covers the whole document', () => {
    const said = pdfsig(file)
    expect(said).toContain('Signature is Valid')
    expect(said).toContain('Total document signed')
    expect(said).toContain('ETSI.CAdES.detached')
  })

  it.each([0.05, 0.3, 0.6])('is invalid after one changed byte, at %d of the signed pages', async (share) => {
    const changed = Buffer.from(pdf)
    const at = Math.floor(pdf.indexOf('/ByteRange') * share)
    changed[at] = (changed[at] ?? 0) ^ 1
    const path = join(folder, `changed-${share}.pdf`)
    await writeFile(path, changed)
    expect(pdfsig(path)).toContain('Digest Mismatch')
  })

  it('is invalid after one changed byte behind the signature', async () => {
    const changed = Buffer.from(pdf)
    const at = pdf.lastIndexOf('startxref') - 3
    changed[at] = (changed[at] ?? 0) ^ 1
    await writeFile(join(folder, 'tail.pdf'), changed)
    expect(pdfsig(join(folder, 'tail.pdf'))).not.toContain('Signature is Valid')
  })
})

describe('what the file carries', () => {
  it('embeds every font, and only ours', () => {
    const rows = run('pdffonts', file).trim().split('\n').slice(2)
    expect(rows.length).toBeGreaterThan(2)
    for (const row of rows) {
      expect(row).toMatch(/SourceS(ans3|erif4)-|SourceCodePro-/)
      expect(row).toMatch(/\byes yes yes\b/)
    }
  })

  it('attaches the signed content, byte for byte', async () => {
    expect(run('pdfdetach', '-list', file)).toContain('memo.json')
    const saved = join(folder, 'memo.json')
    run('pdfdetach', '-save', '1', '-o', saved, file)
    expect(sha256(await readFile(saved))).toBe(contentHash)
  })

  it('names in its properties neither arms nor people nor machines', () => {
    const properties = run('pdfinfo', file)
    for (const word of ['HIGH', 'PBO', 'Vellorane', 'Placebo', 'Halloran', folder]) expect(properties).not.toContain(word)
  })
})

const pagesOf = (path: string) => run('pdftotext', '-layout', path, '-').split('\f').filter(page => page.trim() !== '')

describe('pages', () => {
  it('shows on each who signed, as what, meaning, moment, hash, tree head, caution and place', () => {
    const pages = pagesOf(file)
    expect(pages.length).toBeGreaterThan(2)
    for (const [index, page] of pages.entries()) {
      for (const part of ['Ines Halloran, Biostatistician', 'signed the memo', '13 Jun 2026, 10:02:11 UTC', contentHash,
        content.record.treeHead.root, CAUTION, `page ${index + 1} of ${pages.length}`, 'LARKMOOR-204']) expect(page).toContain(part)
    }
  })

  it('says class, force, edition, step, and that the question changes', () => {
    const text = pagesOf(file).join(' ').replace(/\s+/g, ' ')
    for (const part of ['foreseen switch', 'binding', 'Blinded edition', 'Changes the question', 'No treatment contrast was computed',
      'Tomas Ferrant', 'acknowledged', 'Accept the registered step', 'Noor Vasquez']) expect(text).toContain(part)
  })

  it('withholds figures that rest on arms and prints those that do not', async () => {
    const text = pagesOf(file).join(' ')
    expect(text).toContain('held behind the blind')
    expect(text).not.toContain('W = ')
    const path = join(folder, 'arm-free.pdf')
    await writeFile(path, await render({ ...content, judged: { ...content.judged, prerequisites: [openFigures] } }))
    const open = pagesOf(path).join(' ')
    for (const part of ['G1 = −1.23 (−1.91 to −0.56)', 'W = 0.871, p < 0.001', 'level 0.05', '48']) expect(open).toContain(part)
  })
})
