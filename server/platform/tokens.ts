import { randomBytes } from 'node:crypto'
import { sha256 } from './hashes'

/** A secret for one link: 256 random bits. The database keeps its hash only, so a copy of it opens nothing. */
export function makeToken(): { token: string, hash: Buffer } {
  const token = randomBytes(32).toString('base64url')
  return { token, hash: hashToken(token) }
}

export const hashToken = (token: string): Buffer => sha256(`link ${token}`)
