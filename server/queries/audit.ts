import type { Knex } from 'knex'
import { fromBinary, fromBinaryOrNull, toBinary, toBinaryOrNull } from '../platform/ids'
import { hex } from '../platform/hashes'

export interface AuditLink {
  id: string
  chainId: string
  seq: number
  at: Date
  personId: string | null
  command: string
  subject: string
  /** Canonical JSON text. */
  payload: string
  previousHash: Buffer
  hash: Buffer
}

const GENESIS = Buffer.alloc(32)

/** The end of a chain, locked until the transaction ends; the last lock that unitOfWork takes. */
export async function lockAuditHead(trx: Knex.Transaction, chainId: string): Promise<{ seq: number, hash: Buffer }> {
  const key = toBinary(chainId)
  const found = await trx('audit_head').where({ chain_id: key }).forUpdate().first('seq', 'hash') as { seq: number, hash: Buffer } | undefined
  if (found) return found
  // A concurrent first link loses on the primary key, and its whole transaction is tried again.
  await trx('audit_head').insert({ chain_id: key, seq: 0, hash: GENESIS })
  return { seq: 0, hash: GENESIS }
}

export async function appendAudit(trx: Knex.Transaction, link: AuditLink): Promise<void> {
  await trx('audit').insert({
    id: toBinary(link.id), chain_id: toBinary(link.chainId), seq: link.seq, at: link.at, person_id: toBinaryOrNull(link.personId), command: link.command,
    subject: link.subject, payload: link.payload, previous_hash: link.previousHash, hash: link.hash,
  })
  await trx('audit_head').where({ chain_id: toBinary(link.chainId) }).update({ seq: link.seq, hash: link.hash })
}

interface AuditRow { id: Buffer, chain_id: Buffer, seq: number, at: Date, person_id: Buffer | null, command: string, subject: string, payload: string, previous_hash: Buffer, hash: Buffer }

/** Links of one chain with seq above `after`, oldest first. */
export async function readChain(db: Knex, chainId: string, after: number, limit: number): Promise<AuditLink[]> {
  const rows = await db('audit').where({ chain_id: toBinary(chainId) }).where('seq', '>', after).orderBy('seq').limit(limit) as AuditRow[]
  return rows.map(toLink)
}

/** Newest links of a chain first, with the names of who did it. */
export async function newestAudit(db: Knex, chainId: string, { before, limit }: { before: number | null, limit: number }) {
  const rows = await db('audit').leftJoin('person', 'person.id', 'audit.person_id').where('audit.chain_id', toBinary(chainId))
    .modify((query) => { if (before !== null) void query.where('audit.seq', '<', before) })
    .orderBy('audit.seq', 'desc').limit(limit).select('audit.*', 'person.name as person_name') as (AuditRow & { person_name: string | null })[]
  return rows.map(row => ({ ...toLink(row), personName: row.person_name, hashText: hex(row.hash) }))
}

export async function auditHead(db: Knex, chainId: string): Promise<{ seq: number, hash: Buffer } | null> {
  const row = await db('audit_head').where({ chain_id: toBinary(chainId) }).first('seq', 'hash') as { seq: number, hash: Buffer } | undefined
  return row ?? null
}

function toLink(row: AuditRow): AuditLink {
  return {
    id: fromBinary(row.id), chainId: fromBinary(row.chain_id), seq: row.seq, at: row.at, personId: fromBinaryOrNull(row.person_id), command: row.command,
    subject: row.subject, payload: row.payload, previousHash: row.previous_hash, hash: row.hash,
  }
}
