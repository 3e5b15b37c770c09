import { CAUTION } from '../../shared/caution'
import { AppError } from '../../shared/errors'
import { GAP_DRAWS, type OpenGap } from '../../shared/map/gaps'
import type { Actor } from '../../shared/permissions'
import type { AssignGap, BenchTaskDto, GapAssignmentDto, GapListDto } from '../../shared/schemas/gap'
import type { Deps } from '../platform/deps'
import { type Addressee, addressees, programmeAddressees, programmeCode } from '../queries/addresses'
import { currentAssignment, currentAssignments, type GapAssignmentRow, insertAssignment } from '../queries/gapAssignments'
import { openGaps } from './gapRows'
import { changedMeanwhile, orTaken } from './registryWords'
import { unitOfWork, type Work } from './unitOfWork'
import type { Knex } from 'knex'

const dayOf = (time: Date): string => time.toISOString().slice(0, 10)

/** Every gap with what it would settle and who is asked to close it. */
export async function listGaps(deps: Pick<Deps, 'db' | 'clock'>, { programmeId }: { programmeId: string }): Promise<GapListDto> {
  const [{ gaps, ...rest }, assignments, members] = await Promise.all([openGaps(deps.db, programmeId), currentAssignments(deps.db, programmeId), staffOf(deps.db, programmeId)])
  const today = dayOf(deps.clock.now())
  return {
    ...rest, draws: GAP_DRAWS, members: members.map(one => ({ id: one.personId, name: one.name })),
    gaps: gaps.map((gap) => {
      const row = assignments.find(one => one.complexId === gap.complexId && one.key === gap.key)
      return { ...gap, assignment: row ? assignmentDto(row, today) : null, seq: row?.seq ?? 0 }
    }),
  }
}

/** Gaps that a person is asked to close and that are still open, the one due first ahead. */
export async function tasksOf(deps: Pick<Deps, 'db' | 'clock'>, { programmeId, personId }: { programmeId: string, personId: string }): Promise<BenchTaskDto[]> {
  const own = (await currentAssignments(deps.db, programmeId)).filter(one => one.assigneeId === personId)
  // placing every agent is spared to whoever was asked for nothing
  if (own.length === 0) return []
  const { gaps } = await openGaps(deps.db, programmeId)
  const today = dayOf(deps.clock.now())
  return own.flatMap((row) => {
    const gap = gaps.find(one => one.complexId === row.complexId && one.key === row.key)
    const assignment = assignmentDto(row, today)
    return gap && assignment ? [{ agent: gap.agent, key: gap.key, what: gap.what, assignment }] : []
  }).sort((one, other) => one.assignment.due < other.assignment.due ? -1 : 1)
}

/** null where the task was taken back. */
function assignmentDto({ assigneeId, assignee, due, note, byName, at }: GapAssignmentRow, today: string): GapAssignmentDto | null {
  return assigneeId !== null && assignee !== null && due !== null ? { assigneeId, assignee, due, note, by: byName, at: at.toISOString(), isOverdue: due < today } : null
}

/** Active people of a programme who may be asked: partners see no gaps. */
async function staffOf(db: Knex, programmeId: string): Promise<Addressee[]> {
  const all = (await Promise.all((['chemist', 'physicist', 'lead'] as const).map(role => programmeAddressees(db, programmeId, role)))).flat()
  return [...new Map(all.map(one => [one.personId, one])).values()].sort((one, other) => one.name < other.name ? -1 : 1)
}

interface AssignCommand { actor: Actor, programmeId: string, body: AssignGap, idempotency?: { key: string, request: unknown } | undefined }

/**
 * Asks a person to close a gap by a day, or takes the task back; both are told by mail.
 * @throws AppError('conflict') when the gap is closed meanwhile or somebody else assigned it first; AppError('invalidInput') for a person who may not be asked or a day gone by
 */
export async function assignGap(deps: Deps, { actor, programmeId, body, idempotency }: AssignCommand): Promise<{ seq: number }> {
  return await unitOfWork(deps, { actor, name: 'assignGap', programmeId, idempotency }, async (work) => {
    const gap = (await openGaps(work.trx, programmeId)).gaps.find(one => one.agent === body.agent && one.key === body.key)
    if (!gap) throw new AppError('conflict', `This gap of ${body.agent} is not open: it was closed, or the agent was stopped.`, { field: 'key', accepted: 'a gap that the page lists' })
    const before = await currentAssignment(work.trx, programmeId, gap)
    const refuse = async () => {
      const latest = await currentAssignment(work.trx, programmeId, gap, { latest: true })
      return changedMeanwhile(`The assignment of this gap of ${body.agent}`, latest && { personName: latest.byName, at: latest.at })
    }
    if ((before?.seq ?? 0) !== body.expectedSeq) throw await refuse()
    if (body.task === null && before?.assigneeId == null) throw new AppError('invalidInput', 'Nobody is asked to close this gap, so nothing can be taken back.', { field: 'task', accepted: 'a person and a day' })
    const assignee = body.task && await assigneeOf(work, { programmeId, task: body.task })
    const seq = body.expectedSeq + 1
    await orTaken('seq', () => insertAssignment(work.trx, {
      id: work.id(), programmeId, complexId: gap.complexId, key: gap.key, seq, what: gap.what.slice(0, 1000), assigneeId: assignee?.personId ?? null, due: body.task?.due ?? null, note: body.task?.note ?? null,
      personId: actor.personId, at: work.now,
    }), refuse)
    await tell(deps, work, { actor, programmeId, body, gap, assignee, before, seq })
    return { result: { seq }, subject: `agent ${gap.complexId}`, payload: { ...body, what: gap.what } }
  })
}

async function assigneeOf(work: Work, { programmeId, task }: { programmeId: string, task: NonNullable<AssignGap['task']> }): Promise<Addressee> {
  const found = (await staffOf(work.trx, programmeId)).find(one => one.personId === task.assignee)
  if (!found) throw new AppError('invalidInput', 'This person cannot be asked.', { field: 'task.assignee', accepted: 'an active chemist, physicist or lead of the programme' })
  const today = dayOf(work.now)
  if (task.due < today) throw new AppError('invalidInput', `The due day ${task.due} has gone by.`, { field: 'task.due', accepted: `${today} or later` })
  return found
}

interface Told { actor: Actor, programmeId: string, body: AssignGap, gap: OpenGap, assignee: Addressee | null, before: GapAssignmentRow | null, seq: number }

async function tell(deps: Deps, work: Work, { actor, programmeId, body, gap, assignee, before, seq }: Told): Promise<void> {
  const foot = ['', `${deps.origin}/${await programmeCode(work.trx, programmeId)}/gaps`, '', `Lanthorn. ${CAUTION}`]
  const send = (one: Addressee, subject: string, lines: readonly string[]) => work.sendMail({
    to: one.email, template: 'gap.assigned', dedupeKey: `gap:${gap.complexId}:${gap.key}:${seq}:${one.personId}`, subject, body: [`${one.name},`, '', ...lines, ...foot].join('\n'),
  })
  if (assignee && body.task) {
    await send(assignee, `${gap.agent}: a gap to close by ${body.task.due}`, [`${actor.name} asks you to close a gap of ${gap.agent} by ${body.task.due}:`, '', gap.what, ...(body.task.note ? ['', body.task.note] : [])])
  }
  if (before?.assigneeId && before.assigneeId !== assignee?.personId) {
    for (const one of await addressees(work.trx, [before.assigneeId])) await send(one, `${gap.agent}: a gap is no longer yours to close`, [`${actor.name} took back what you were asked for ${gap.agent}:`, '', gap.what])
  }
}
