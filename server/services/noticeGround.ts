import { type Change, groundMoved } from '../../shared/map/ground'
import { canonicalJson } from '../../shared/science/canonical'
import type { Deps } from '../platform/deps'
import { programmeAddressees, programmeCode } from '../queries/addresses'
import { listDecisionRows, findDecision, signaturesOf } from '../queries/decisions'
import { insertNotice, listNotices } from '../queries/notices'
import { findProfileVersion } from '../queries/profiles'
import { readGround } from './takeSnapshot'
import { unitOfWork, type Work } from './unitOfWork'

export interface NoticeGroundInput { programmeId: string, cause: string }

/**
 * Looks at every standing decision of a programme again after signed evidence came, changed or went: "the ground has moved". Nothing is applied: the lead
 * is told, and decides. Safe to run twice: one cause is noticed once for a decision.
 * @returns how many notices were written
 */
export async function noticeGround(deps: Deps, { programmeId, cause }: NoticeGroundInput): Promise<number> {
  const standing = (await listDecisionRows(deps.db, programmeId)).filter(one => one.supersededBy === null)
  let written = 0
  for (const decision of standing) {
    const changes = await changesOf(deps, programmeId, decision.id)
    if (changes.length === 0 || await wasTold(deps, programmeId, decision.id, changes)) continue
    written += await unitOfWork(deps, { actor: null, name: 'noticeGround', programmeId }, async (work) => {
      const by = await causedBy(work, programmeId, cause)
      const isNew = await insertNotice(work.trx, { id: work.id(), programmeId, decisionId: decision.id, cause, changes, by, at: work.now })
      if (isNew) await tellLeads(deps, work, { programmeId, agent: decision.agentCode, decisionId: decision.id, cause, changes, by })
      return { result: isNew ? 1 : 0, subject: `decision ${decision.id}`, payload: { cause, changes } }
    })
  }
  return written
}

/** Whether the newest notice of this decision says the same already: two causes of one change are one notice. */
async function wasTold(deps: Deps, programmeId: string, decisionId: string, changes: readonly Change[]): Promise<boolean> {
  const [newest] = await listNotices(deps.db, programmeId, decisionId)
  return newest !== undefined && canonicalJson(newest.changes) === canonicalJson(changes)
}

async function changesOf(deps: Deps, programmeId: string, decisionId: string) {
  const decision = (await findDecision(deps.db, programmeId, decisionId))!
  const profile = (await findProfileVersion(deps.db, programmeId, decision.profileVersionId))!
  const now = await readGround(deps.db, { programmeId, agentCode: decision.agentCode, profile })
  return groundMoved(decision.snapshot, now)
}

/** Who took the step that moved the ground; null where no person did. */
async function causedBy(work: Work, programmeId: string, cause: string): Promise<string | null> {
  const [event, subjectId] = cause.split(':')
  if (event !== 'signed' || !subjectId) return null
  return (await signaturesOf(work.trx, programmeId, [subjectId])).at(-1)?.personName ?? null
}

interface Moved { programmeId: string, agent: string, decisionId: string, cause: string, changes: readonly Change[], by: string | null }

async function tellLeads(deps: Deps, work: Work, { programmeId, agent, decisionId, cause, changes, by }: Moved): Promise<void> {
  const code = await programmeCode(work.trx, programmeId)
  for (const lead of await programmeAddressees(work.trx, programmeId, 'lead')) {
    await work.sendMail({
      to: lead.email, template: 'decision.groundMoved', dedupeKey: `ground:${decisionId}:${cause}:${lead.personId}`, subject: `The ground has moved: ${agent}`,
      body: [
        `${lead.name},`, '', `Something behind the decision on ${agent} has changed${by ? `; ${by} signed the new value` : ''}:`, '', ...changes.map(one => `- ${one.what}: was ${one.was}, now ${one.now}`), '',
        'The decision stands until you change it.', `${deps.origin}/${code}/decisions/${decisionId}`,
      ].join('\n'),
    })
  }
}
