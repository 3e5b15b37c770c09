import { createHash } from 'node:crypto'
import { canonicalJson } from '../../shared/science/canonical'

export function sha256(data: string | Uint8Array): Buffer {
  return createHash('sha256').update(data).digest()
}

/** Canonical text of a value with its SHA-256: what is stored, compared and chained. */
export function sealed(value: unknown): { text: string, hash: Buffer } {
  const text = canonicalJson(value)
  return { text, hash: sha256(text) }
}

export const hex = (bytes: Uint8Array): string => Buffer.from(bytes).toString('hex')
