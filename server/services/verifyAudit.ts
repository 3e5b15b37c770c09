import type { Deps } from '../platform/deps'
import { auditHead, readChain } from '../queries/audit'
import { linkHash } from './unitOfWork'

export type AuditVerdict = { whole: true, links: number } | { whole: false, links: number, brokenAt: number, why: string }

const PAGE = 500

/** Walks a chain from its first link and recomputes every hash; says where it first does not hold. */
export async function verifyAudit({ db }: Pick<Deps, 'db'>, chainId: string): Promise<AuditVerdict> {
  let previous: Buffer = Buffer.alloc(32)
  let seq = 0
  for (;;) {
    const links = await readChain(db, chainId, seq, PAGE)
    for (const link of links) {
      if (link.seq !== seq + 1) return { whole: false, links: seq, brokenAt: seq + 1, why: 'a link is missing' }
      if (!link.previousHash.equals(previous)) return { whole: false, links: seq, brokenAt: link.seq, why: 'it does not follow from the link before' }
      if (!linkHash(link).equals(link.hash)) return { whole: false, links: seq, brokenAt: link.seq, why: 'its content does not match its hash' }
      previous = link.hash
      seq = link.seq
    }
    if (links.length < PAGE) break
  }
  const head = await auditHead(db, chainId)
  if ((head?.seq ?? 0) !== seq) return { whole: false, links: seq, brokenAt: seq + 1, why: 'links at the end are missing' }
  if (head && !head.hash.equals(previous)) return { whole: false, links: seq - 1, brokenAt: seq, why: 'the last link is not the one that was written' }
  return { whole: true, links: seq }
}
