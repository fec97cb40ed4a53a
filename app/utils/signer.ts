/** What the signing dialog gives back. */
export interface SignatureEntry {
  readonly identifier: string
  readonly password: string
  readonly reason?: string | null
}

/** The two components of a signature, as every signed operation takes them. */
export const signer = ({ identifier, password }: SignatureEntry) => ({ identifier, password })
