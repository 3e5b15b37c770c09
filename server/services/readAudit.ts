import type { z } from 'zod'
import type { AuditPage, AuditVerdict } from '../../shared/schemas/people'
import type { Deps } from '../platform/deps'
import { newestAudit } from '../queries/audit'
import { verifyAudit } from './verifyAudit'

const PAGE = 100

/** A page of a chain, newest first; `before` = seq of the oldest link seen. */
export async function readAudit({ db }: Pick<Deps, 'db'>, { chainId, before }: { chainId: string, before: number | null }): Promise<z.output<typeof AuditPage>> {
  const rows = await newestAudit(db, chainId, { before, limit: PAGE + 1 })
  const links = rows.slice(0, PAGE).map(row => ({
    seq: row.seq, at: row.at.toISOString(), personName: row.personName, command: row.command, subject: row.subject, payload: row.payload, hash: row.hashText,
  }))
  return { links, more: rows.length > PAGE }
}

/** Walks the whole chain; says where it does not hold, if anywhere. */
export async function auditVerdict(deps: Pick<Deps, 'db'>, { chainId }: { chainId: string }): Promise<AuditVerdict> {
  const verdict = await verifyAudit(deps, chainId)
  return verdict.whole ? { ...verdict, brokenAt: null, why: null } : verdict
}
