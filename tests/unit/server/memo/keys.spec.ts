import { createPrivateKey, X509Certificate } from 'node:crypto'
import { mkdtemp, readdir, readFile, rm, stat } from 'node:fs/promises'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { ensureMemoKeys, readMemoKeys } from '../../../../server/memo/keys'

let dataDir: string
const keyFile = () => join(dataDir, 'keys', 'memo-signing-key.pem')
const certificateFile = () => join(dataDir, 'keys', 'memo-signing-certificate.pem')

beforeAll(async () => {
  dataDir = await mkdtemp(join(tmpdir(), 'stipule-keys-'))
  await ensureMemoKeys(dataDir)
})
afterAll(() => rm(dataDir, { recursive: true }))

describe('ensureMemoKeys', () => {
  it('keeps key and folder from everybody else', async () => {
    expect((await stat(join(dataDir, 'keys'))).mode & 0o777).toBe(0o700)
    for (const file of [keyFile(), certificateFile()]) expect((await stat(file)).mode & 0o777).toBe(0o600)
    expect(await readdir(join(dataDir, 'keys'))).toHaveLength(2)
  })

  it('makes a certificate that belongs to the key and vouches for signatures alone', async () => {
    const certificate = new X509Certificate(await readFile(certificateFile()))
    expect(certificate.checkPrivateKey(createPrivateKey(await readFile(keyFile())))).toBe(true)
    expect(certificate.verify(certificate.publicKey)).toBe(true)
    expect(certificate.ca).toBe(false)
    expect(certificate.subject).toBe('CN=Stipule memo signature')
    expect(certificate.publicKey.asymmetricKeyDetails?.modulusLength).toBe(3072)
  })

  it('never replaces a key', async () => {
    const before = await readFile(keyFile(), 'utf8')
    await ensureMemoKeys(dataDir)
    expect(await readFile(keyFile(), 'utf8')).toBe(before)
  })

  it('gives a key that signs and cannot be taken out again', async () => {
    const { privateKey, certificate } = await readMemoKeys(join(dataDir, 'keys'))
    expect([privateKey.extractable, privateKey.usages]).toEqual([false, ['sign']])
    expect(Buffer.from(certificate)).toEqual(new X509Certificate(await readFile(certificateFile())).raw)
  })

  it('refuses to go on when half of it is lost', async () => {
    const half = await mkdtemp(join(tmpdir(), 'stipule-keys-'))
    await ensureMemoKeys(half)
    await rm(join(half, 'keys', 'memo-signing-key.pem'))
    await expect(ensureMemoKeys(half)).rejects.toThrow('missing')
    await rm(half, { recursive: true })
  })
})
