import { parse, stringify, v7, validate } from 'uuid'

/** Ids are UUIDv7 text in the domain and BINARY(16) in the database; the time in front keeps inserts at the end of the index. */
export interface Ids { next: () => string }

export const randomIds: Ids = { next: () => v7() }

export const isId = (text: string): boolean => validate(text)

/** @throws TypeError when the text is no UUID: ids are checked by schemas before they come here */
export function toBinary(id: string): Buffer {
  return Buffer.from(parse(id))
}

export const toBinaryOrNull = (id: string | null | undefined): Buffer | null => id ? toBinary(id) : null

export function fromBinary(bytes: Uint8Array): string {
  return stringify(new Uint8Array(bytes))
}

export const fromBinaryOrNull = (bytes: Uint8Array | null | undefined): string | null => bytes ? fromBinary(bytes) : null
