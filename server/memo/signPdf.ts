import { webcrypto } from 'node:crypto'
import { fromBER, ObjectIdentifier, OctetString, Sequence } from 'asn1js'
import { Attribute, Certificate, ContentInfo, EncapsulatedContentInfo, IssuerAndSerialNumber, SignedAndUnsignedAttributes, SignedData, SignerInfo } from 'pkijs'
import { plainAddPlaceholder } from '@signpdf/placeholder-plain'
import { SignPdf } from '@signpdf/signpdf'
import { Signer } from '@signpdf/utils'
import type { MemoKeys } from './keys'

/** Bytes kept for the signature; leaves room for a time stamp. */
const SIGNATURE_LENGTH = 16384

const OID = {
  data: '1.2.840.113549.1.7.1',
  signedData: '1.2.840.113549.1.7.2',
  contentType: '1.2.840.113549.1.9.3',
  messageDigest: '1.2.840.113549.1.9.4',
  signingCertificateV2: '1.2.840.113549.1.9.16.2.47',
} as const

const sha256 = (bytes: BufferSource) => webcrypto.subtle.digest('SHA-256', bytes)

/** ESSCertIDv2 with the default SHA-256, as RFC 5035 section 3 encodes it. */
const signingCertificate = (certificateHash: ArrayBuffer) => new Sequence({
  value: [new Sequence({ value: [new Sequence({ value: [new OctetString({ valueHex: certificateHash })] })] })],
})

function signedAttributes(digest: ArrayBuffer, certificateHash: ArrayBuffer): SignedAndUnsignedAttributes {
  return new SignedAndUnsignedAttributes({
    type: 0,
    attributes: [
      new Attribute({ type: OID.contentType, values: [new ObjectIdentifier({ value: OID.data })] }),
      new Attribute({ type: OID.messageDigest, values: [new OctetString({ valueHex: digest })] }),
      new Attribute({ type: OID.signingCertificateV2, values: [signingCertificate(certificateHash)] }),
    ],
  })
}

/** Detached CMS with the attributes that PAdES B-B asks for (EN 319 142-1): no signing time of its own. */
class CmsSigner extends Signer {
  constructor(private readonly keys: MemoKeys) {
    super()
  }

  override async sign(pdf: Buffer): Promise<Buffer> {
    const bytes = Uint8Array.from(pdf)
    const certificate = new Certificate({ schema: fromBER(this.keys.certificate).result })
    const signer = new SignerInfo({
      version: 1,
      sid: new IssuerAndSerialNumber({ issuer: certificate.issuer, serialNumber: certificate.serialNumber }),
      signedAttrs: signedAttributes(await sha256(bytes), await sha256(this.keys.certificate)),
    })
    const signed = new SignedData({
      version: 1,
      encapContentInfo: new EncapsulatedContentInfo({ eContentType: OID.data }),
      signerInfos: [signer],
      certificates: [certificate],
    })
    await signed.sign(this.keys.privateKey, 0, 'SHA-256', bytes.buffer)
    return Buffer.from(new ContentInfo({ contentType: OID.signedData, content: signed.toSchema(true) }).toSchema().toBER())
  }
}

export interface Seal {
  /** Why it is signed, as signature panels show it. */
  readonly reason: string
  readonly name: string
  readonly signingTime: Date
}

/**
 * Embeds a detached CMS signature over the whole document. Nothing may be added to the file afterwards.
 *
 * @param pdf a finished PDF with a plain cross-reference table.
 */
export function signPdf(pdf: Buffer, keys: MemoKeys, { reason, name, signingTime }: Seal): Promise<Buffer> {
  const prepared = plainAddPlaceholder({
    pdfBuffer: pdf, reason, name, contactInfo: '', location: '', signingTime, signatureLength: SIGNATURE_LENGTH, subFilter: 'ETSI.CAdES.detached',
  })
  return new SignPdf().sign(prepared, new CmsSigner(keys), signingTime)
}
