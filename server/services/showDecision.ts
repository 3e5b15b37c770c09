import { AppError } from '../../shared/errors'
import type { Scope } from '../../shared/permissions'
import type { DecisionDto, DecisionRowDto, DecisionSnapshot, NoticeDto } from '../../shared/schemas/decision'
import type { Deps } from '../platform/deps'
import { agentMark } from '../queries/agentMarks'
import { type DecisionRow, findDecision, listDecisionRows } from '../queries/decisions'
import { listNotices, type NoticeRow } from '../queries/notices'

interface ReadInput { programmeId: string, isStaff: boolean }

/** All decisions of a programme, newest first. Notices are for its staff: a partner learns of them from the next decision. */
export async function listDecisions(deps: Pick<Deps, 'db'>, { programmeId, isStaff }: ReadInput): Promise<{ decisions: DecisionRowDto[] }> {
  const [rows, notices] = await Promise.all([listDecisionRows(deps.db, programmeId), isStaff ? listNotices(deps.db, programmeId) : []])
  return { decisions: await Promise.all(rows.map(row => toRowDto(deps, programmeId, row, notices))) }
}

/** One decision with what was frozen with it, its history and what has moved since. */
export async function showDecision(deps: Pick<Deps, 'db'>, { programmeId, isStaff, id }: ReadInput & { id: string }): Promise<DecisionDto> {
  const found = await findDecision(deps.db, programmeId, id)
  if (!found) throw new AppError('notFound', 'There is no such decision, or it is not open to you.')
  const { snapshot, snapshotHash, ...row } = found
  const [history, notices] = await Promise.all([listDecisionRows(deps.db, programmeId, row.complexId), isStaff ? listNotices(deps.db, programmeId, id) : []])
  return {
    ...await toRowDto(deps, programmeId, row, notices), snapshot: isStaff ? snapshot : withoutReadiness(snapshot), snapshotHash, notices: notices.map(toNoticeDto),
    history: history.map(one => ({ id: one.id, outcome: one.outcome, by: one.personName, at: one.at.toISOString() })),
  }
}

/** What a chemist typed and nobody signs stays among the staff. */
function withoutReadiness(snapshot: DecisionSnapshot): DecisionSnapshot {
  const { readiness: _, ...rest } = snapshot
  return rest
}

async function toRowDto(deps: Pick<Deps, 'db'>, programmeId: string, row: DecisionRow, notices: readonly NoticeRow[]): Promise<DecisionRowDto> {
  const mark = await agentMark(deps.db, programmeId, row.complexId)
  return {
    id: row.id, agent: row.agentCode, mechanism: mark?.mechanism ?? 'T1', topology: mark?.topology ?? 'ring', outcome: row.outcome, reasons: row.reasons, by: row.personName, at: row.at.toISOString(),
    profile: `${row.profileName}, version ${row.profileVersionNo}`, supersedes: row.supersedes, supersededBy: row.supersededBy,
    groundMoved: row.supersededBy ? 0 : notices.filter(one => one.decisionId === row.id && !one.ack).length,
  }
}

const toNoticeDto = (row: NoticeRow): NoticeDto => ({
  id: row.id, cause: row.cause, at: row.at.toISOString(), changes: row.changes, by: row.by,
  acknowledged: row.ack ? { by: row.ack.by, at: row.ack.at.toISOString(), note: row.ack.note } : null,
})

/** Staff see notices; whoever sees signed evidence only does not. */
export const isStaffScope = (scope: Scope): boolean => scope === 'programme'
