import { AppError } from '../../shared/errors'
import type { CheckSubjectKind } from '../../shared/checks/transitions'
import type { Actor } from '../../shared/permissions'
import type { CheckDto, CheckSubjectDto, QueueItemDto } from '../../shared/schemas/check'
import type { Deps } from '../platform/deps'
import { addressees } from '../queries/addresses'
import { type CheckCurrent, checkEvents, currentChecks, findCheckState } from '../queries/checks'
import { agentMark } from '../queries/agentMarks'
import { type CheckSubject, findCheckSubject } from '../queries/checkSubjects'
import { countFlags } from '../queries/signatureGround'
import { secondSignature, signingBar } from './checkSteps'
import { describeSubject } from './describeSubject'
import { placeInQueue, submitBar } from './carryOver'
import { otherSlopes } from './otherSlopes'

interface ShowInput { actor: Actor, programmeId: string, kind: CheckSubjectKind, id: string }

/** Everything about the check of one subject: where it stands, what happened, and who may do what next. */
export async function showCheck(deps: Deps, { actor, programmeId, kind, id }: ShowInput): Promise<CheckDto> {
  const subject = await findCheckSubject(deps.db, programmeId, kind, id)
  if (!subject) throw new AppError('notFound', 'There is no such page, or it is not open to you.')
  const [current, events] = await Promise.all([findCheckState(deps.db, programmeId, id), checkEvents(deps.db, programmeId, id)])
  const last = events.at(-1)
  const already = last?.event === 'firstSigned' && last.personId === actor.personId ? 'You gave the first signature; the second one is somebody else\'s.' : null
  return {
    ...await subjectDto(deps, programmeId, subject, current),
    events: events.map(event => ({ ...event, at: event.at.toISOString() })),
    signingBarred: signingBar(subject, actor.personId) ?? already,
    secondSignature: await secondSignature(deps.db, subject, programmeId),
    submitBarred: submitBar(subject),
    takesPlaceOf: (await placeInQueue(deps.db, programmeId, subject, current.state))?.versionNo ?? null,
    others: await otherSlopes(deps, programmeId, subject),
  }
}

/** A subject with its agent's mark and where its check stands. */
export async function subjectDto(deps: Deps, programmeId: string, subject: CheckSubject, current: { state: CheckSubjectDto['state'], seq: number, since: Date | null }): Promise<CheckSubjectDto> {
  const mark = subject.complexId ? await agentMark(deps.db, programmeId, subject.complexId) : null
  const { title, description } = describeSubject(deps, subject)
  return {
    kind: subject.kind, id: subject.id, chainId: subject.chainId, versionNo: subject.versionNo, newestVersionNo: subject.newestVersionNo, title, description, agentCode: subject.agentCode,
    mechanism: mark?.mechanism ?? null, topology: mark?.topology ?? null, enteredBy: subject.enteredBy, state: current.state, seq: current.seq, since: current.since?.toISOString() ?? null,
  }
}

/** What waits for a check, longest waiting first, with who sent it and how many flags it carries. */
export async function listQueue(deps: Deps, { actor, programmeId }: { actor: Actor, programmeId: string }): Promise<QueueItemDto[]> {
  const waiting = await currentChecks(deps.db, programmeId, ['waiting', 'firstSigned'])
  const flags = await countFlags(deps.db, waiting.filter(one => one.kind === 'fit').map(one => one.subjectId))
  const senders = new Map((await addressees(deps.db, waiting.map(one => one.personId))).map(one => [one.personId, one.name]))
  const items = await Promise.all(waiting.map(one => toQueueItem(deps, { actor, programmeId, one })))
  return items.filter(item => item !== null).map(item => ({ ...item.dto, flags: flags.get(item.dto.id.replaceAll('-', '')) ?? 0, submittedBy: senders.get(item.one.personId) ?? 'somebody who has left' }))
}

async function toQueueItem(deps: Deps, { actor, programmeId, one }: { actor: Actor, programmeId: string, one: CheckCurrent }) {
  const subject = await findCheckSubject(deps.db, programmeId, one.kind, one.subjectId)
  if (!subject || subject.barred) return null
  return { one, dto: { ...await subjectDto(deps, programmeId, subject, one), mine: signingBar(subject, actor.personId) !== null } }
}
