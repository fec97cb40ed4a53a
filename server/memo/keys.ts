import { createPrivateKey, webcrypto, X509Certificate } from 'node:crypto'
import { chmod, mkdir, readFile, rename, stat, writeFile } from 'node:fs/promises'
import { join } from 'node:path'
import { BitString, Integer, OctetString, Utf8String } from 'asn1js'
import { AttributeTypeAndValue, BasicConstraints, Certificate, Extension } from 'pkijs'

const KEY_FILE = 'memo-signing-key.pem'
const CERTIFICATE_FILE = 'memo-signing-certificate.pem'
const YEARS = 10

const OID = {
  commonName: '2.5.4.3',
  subjectKeyIdentifier: '2.5.29.14',
  keyUsage: '2.5.29.15',
  basicConstraints: '2.5.29.19',
} as const

/** digitalSignature and nonRepudiation, the two highest bits (RFC 5280, 4.2.1.3). */
const KEY_USAGE = 0b11000000

export interface MemoKeys {
  readonly privateKey: webcrypto.CryptoKey
  /** X.509 certificate, DER. */
  readonly certificate: ArrayBuffer
}

const algorithm = { name: 'RSASSA-PKCS1-v1_5', hash: 'SHA-256' } as const

const pem = (label: string, der: ArrayBuffer) => {
  const lines = Buffer.from(der).toString('base64').match(/.{1,64}/g) ?? []
  return `-----BEGIN ${label}-----\n${lines.join('\n')}\n-----END ${label}-----\n`
}

const isMissing = (error: unknown) => error instanceof Error && 'code' in error && error.code === 'ENOENT'

async function exists(path: string): Promise<boolean> {
  try {
    await stat(path)
    return true
  }
  catch (error) {
    if (isMissing(error)) return false
    throw error
  }
}

/** Neither a person nor a machine: the installation signs that the content was signed by whom it names. */
const nameParts = () => [new AttributeTypeAndValue({ type: OID.commonName, value: new Utf8String({ value: 'Stipule memo signature' }) })]

async function extensionsFor(publicKey: webcrypto.CryptoKey): Promise<Extension[]> {
  const spki = await webcrypto.subtle.exportKey('spki', publicKey)
  const keyHash = await webcrypto.subtle.digest('SHA-256', spki)
  const usage = new BitString({ valueHex: new Uint8Array([KEY_USAGE]).buffer, unusedBits: 6 })
  return [
    new Extension({ extnID: OID.basicConstraints, critical: true, extnValue: new BasicConstraints({ cA: false }).toSchema().toBER() }),
    new Extension({ extnID: OID.keyUsage, critical: true, extnValue: usage.toBER() }),
    new Extension({ extnID: OID.subjectKeyIdentifier, critical: false, extnValue: new OctetString({ valueHex: keyHash.slice(0, 20) }).toBER() }),
  ]
}

/** A positive serial number of 16 random bytes (RFC 5280, 4.1.2.2). */
function serialNumber(): Integer {
  const bytes = webcrypto.getRandomValues(new Uint8Array(16))
  bytes[0] = ((bytes[0] ?? 0) & 0x3f) | 0x40
  return new Integer({ valueHex: bytes.buffer })
}

async function selfSigned({ publicKey, privateKey }: webcrypto.CryptoKeyPair, from: Date): Promise<ArrayBuffer> {
  const certificate = new Certificate()
  certificate.version = 2
  certificate.serialNumber = serialNumber()
  certificate.issuer.typesAndValues = nameParts()
  certificate.subject.typesAndValues = nameParts()
  certificate.notBefore.value = from
  certificate.notAfter.value = new Date(Date.UTC(from.getUTCFullYear() + YEARS, from.getUTCMonth(), from.getUTCDate()))
  certificate.extensions = await extensionsFor(publicKey)
  await certificate.subjectPublicKeyInfo.importKey(publicKey)
  await certificate.sign(privateKey, 'SHA-256')
  return certificate.toSchema().toBER()
}

async function writeSecret(path: string, text: string): Promise<void> {
  const pending = `${path}.pending`
  await writeFile(pending, text, { mode: 0o600 })
  await rename(pending, path)
}

/**
 * Makes the key pair and self-signed certificate that sign memos (RSA 3072), unless they are there already:
 * `keys/` below the data folder with mode 700, files with mode 600.
 *
 * @throws when only one of the two files exists: a lost key must be noticed, not replaced in silence.
 */
export async function ensureMemoKeys(dataDir: string): Promise<void> {
  const folder = join(dataDir, 'keys')
  const [keyFile, certificateFile] = [join(folder, KEY_FILE), join(folder, CERTIFICATE_FILE)]
  const present = await Promise.all([exists(keyFile), exists(certificateFile)])
  if (present.every(Boolean)) return
  if (present.some(Boolean)) throw new Error(`memo signing: one of ${KEY_FILE} and ${CERTIFICATE_FILE} is missing`)
  await mkdir(folder, { recursive: true, mode: 0o700 })
  await chmod(folder, 0o700)
  const pair = await webcrypto.subtle.generateKey(
    { ...algorithm, modulusLength: 3072, publicExponent: new Uint8Array([1, 0, 1]) }, true, ['sign', 'verify'])
  const certificate = await selfSigned(pair, new Date())
  await writeSecret(keyFile, pem('PRIVATE KEY', await webcrypto.subtle.exportKey('pkcs8', pair.privateKey)))
  await writeSecret(certificateFile, pem('CERTIFICATE', certificate))
}

/** Reads the key (PKCS #8) and certificate (X.509) that sign memos; both PEM. */
export async function readMemoKeys(keysDir: string): Promise<MemoKeys> {
  const [keyText, certificateText] = await Promise.all([
    readFile(join(keysDir, KEY_FILE), 'utf8'), readFile(join(keysDir, CERTIFICATE_FILE), 'utf8')])
  const pkcs8 = createPrivateKey(keyText).export({ type: 'pkcs8', format: 'der' })
  const privateKey = await webcrypto.subtle.importKey('pkcs8', pkcs8, algorithm, false, ['sign'])
  return { privateKey, certificate: Uint8Array.from(new X509Certificate(certificateText).raw).buffer }
}
