import type { AnalysisOutcome } from '../../shared/measurements/types'
import { type Actor, scopeOf } from '../../shared/permissions'
import type { BenchDto, BenchFitDto, ReturnedDto, UnsentDto } from '../../shared/schemas/bench'
import type { ProgressJob } from '../../shared/schemas/progress'
import type { Deps } from '../platform/deps'
import { agentMark } from '../queries/agentMarks'
import { checkEvents, currentChecks } from '../queries/checks'
import { findCheckSubject } from '../queries/checkSubjects'
import { listDecisionRows } from '../queries/decisions'
import { findFitById, fitVersions } from '../queries/fits'
import { listNotices } from '../queries/notices'
import { findSeries } from '../queries/series'
import { openStaged } from '../queries/uploads'
import { type UnsentRow, unsentVersions } from '../queries/unsent'
import { tasksOf } from './gaps'
import { readProgress } from './followProgress'
import { listAgents } from './listAgents'
import { listQueue, subjectDto } from './showCheck'

export interface ShowBenchInput { actor: Actor, programmeId: string }

/** Longest list of things to do: who has more than this to do looks at the lists themselves. */
const MOST = 60

/** What there is to do for one person in a programme: what came back, what is under way, what was not sent, what waits for them, what is missing. */
export async function showBench(deps: Deps, input: ShowBenchInput): Promise<BenchDto> {
  const { actor, programmeId } = input
  const [open, sent, fits, staged, queue, ground, { agents }, tasks] = await Promise.all([
    unsentVersions(deps.db, programmeId, MOST), sentByMe(deps, input), fitsOnTheirWay(deps, programmeId), openStaged(deps.db, { programmeId, personId: actor.personId, now: deps.clock.now() }),
    scopeOf(actor, 'check.queue', programmeId) === 'none' ? null : listQueue(deps, input), movedGround(deps, programmeId), listAgents(deps, { programmeId, scope: 'programme' }),
    tasksOf(deps, { programmeId, personId: actor.personId }),
  ])
  const returned = await Promise.all(open.filter(one => one.state === 'returned').map(one => toReturned(deps, input, one)))
  const unsent = await Promise.all(open.filter(one => one.state !== 'returned').map(one => toUnsent(deps, input, one)))
  return {
    returned: returned.filter(one => one !== null), unsent: unsent.filter(one => one !== null), sent, fits, queue, ground, agents, tasks,
    staged: staged.map(one => ({ id: one.id, fileName: one.fileName, bytes: one.bytes, stagedAt: one.createdAt.toISOString(), expiresAt: one.expiresAt.toISOString() })),
  }
}

async function ownSubject(deps: Deps, { actor, programmeId }: ShowBenchInput, row: Pick<UnsentRow, 'kind' | 'id' | 'state' | 'seq' | 'since'>) {
  const subject = await findCheckSubject(deps.db, programmeId, row.kind, row.id)
  return subject && { ...await subjectDto(deps, programmeId, subject, row), mine: subject.enteredBy.some(one => one.personId === actor.personId) }
}

async function toReturned(deps: Deps, input: ShowBenchInput, row: UnsentRow): Promise<ReturnedDto | null> {
  const [own, events] = await Promise.all([ownSubject(deps, input, row), checkEvents(deps.db, input.programmeId, row.id)])
  const last = events.at(-1)
  return own && last ? { ...own, comment: last.comment, by: last.personName, at: last.at.toISOString() } : null
}

async function toUnsent(deps: Deps, input: ShowBenchInput, row: UnsentRow): Promise<UnsentDto | null> {
  const own = await ownSubject(deps, input, row)
  if (!own) return null
  const outcome = row.kind === 'fit' ? JSON.parse((await findFitById(deps.db, input.programmeId, row.id))!.result) as AnalysisOutcome : null
  return { ...own, refusal: outcome && !outcome.ok ? outcome.message : null }
}

async function sentByMe(deps: Deps, input: ShowBenchInput): Promise<BenchDto['sent']> {
  const waiting = await currentChecks(deps.db, input.programmeId, ['waiting', 'firstSigned'])
  const subjects = await Promise.all(waiting.map(one => ownSubject(deps, input, { ...one, id: one.subjectId })))
  return subjects.filter(one => one !== null && one.mine) as BenchDto['sent']
}

async function fitsOnTheirWay(deps: Deps, programmeId: string): Promise<BenchFitDto[]> {
  const { jobs } = await readProgress(deps, programmeId)
  const fits = await Promise.all(jobs.filter(job => ['queued', 'running', 'parked'].includes(job.state)).slice(0, MOST).map(job => toBenchFit(deps, programmeId, job)))
  return fits.filter(one => one !== null)
}

async function toBenchFit(deps: Deps, programmeId: string, job: ProgressJob): Promise<BenchFitDto | null> {
  const series = job.seriesId === null ? null : await findSeries(deps.db, programmeId, job.seriesId, 'programme')
  if (!series || series.isWithdrawn || series.replacedBy) return null
  const [newest] = await fitVersions(deps.db, programmeId, series.id)
  // Ids begin with their time: a version made after a job that stopped is its answer.
  if (job.state === 'parked' && newest && newest.id > job.jobId) return null
  const mark = await agentMark(deps.db, programmeId, series.complexId)
  return { seriesId: series.id, agentCode: series.agentCode, lot: series.lot, title: series.title, mechanism: mark?.mechanism ?? null, topology: mark?.topology ?? null, job }
}

/** Newest open notice of every standing decision. */
async function movedGround(deps: Deps, programmeId: string): Promise<BenchDto['ground']> {
  const [decisions, notices] = await Promise.all([listDecisionRows(deps.db, programmeId), listNotices(deps.db, programmeId)])
  return decisions.filter(one => one.supersededBy === null).flatMap((decision) => {
    const notice = notices.find(one => one.decisionId === decision.id && one.ack === null)
    return notice ? [{ decisionId: decision.id, agentCode: decision.agentCode, at: notice.at.toISOString(), changes: notice.changes.map(({ what, was, now }) => ({ what, was, now })) }] : []
  })
}
