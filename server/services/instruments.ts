import { AppError } from '../../shared/errors'
import type { Actor } from '../../shared/permissions'
import type { InstrumentDto, InstrumentListDto, NameReference } from '../../shared/schemas/instrument'
import { isDuplicate } from '../platform/database'
import type { Deps } from '../platform/deps'
import { allInstruments, currentReferences, findInstrument, insertReferenceTube, referenceTubes, type ReferenceTubeRow } from '../queries/instruments'
import { chartsOf } from './controlCharts'
import { unitOfWork } from './unitOfWork'

const NOT_FOUND = 'There is no such instrument in this programme.'

/** Every instrument with its reference tube and how its last session stands. */
export async function listInstruments(deps: Pick<Deps, 'db' | 'kinds'>, { programmeId }: { programmeId: string }): Promise<InstrumentListDto> {
  const [instruments, references] = await Promise.all([allInstruments(deps.db, programmeId), currentReferences(deps.db, programmeId)])
  return {
    instruments: await Promise.all(instruments.map(async (one) => {
      const reference = references.find(each => each.instrumentId === one.id)
      const charts = reference ? await chartsOf(deps, { programmeId, instrument: one.name, label: reference.label, since: reference.since }) : []
      const sessions = charts.flatMap(chart => chart.sessions).sort((a, b) => a.on < b.on ? -1 : 1)
      const last = sessions.at(-1)
      return { ...one, referenceLabel: reference?.label ?? null, sessions: sessions.length, lastSession: last?.on ?? null, isOutside: last && last.z !== null ? last.isOutside : null }
    })),
  }
}

/** One instrument: its reference tube, those before, and the control charts. @throws AppError('notFound') */
export async function showInstrument(deps: Pick<Deps, 'db' | 'kinds'>, { programmeId, id }: { programmeId: string, id: string }): Promise<InstrumentDto> {
  const instrument = await findInstrument(deps.db, programmeId, id)
  if (!instrument) throw new AppError('notFound', NOT_FOUND)
  const tubes = await referenceTubes(deps.db, programmeId, id)
  const [current] = tubes
  return {
    ...instrument, reference: current ? tubeDto(current) : null, history: tubes.map(tubeDto),
    charts: current ? await chartsOf(deps, { programmeId, instrument: instrument.name, label: current.label, since: current.since }) : [],
  }
}

const tubeDto = ({ label, contents, since, reason, createdByName, createdAt }: ReferenceTubeRow) => ({ label, contents, since: since.toISOString().slice(0, 10), reason, by: createdByName, at: createdAt.toISOString() })

interface NameInput { actor: Actor, programmeId: string, id: string, request: NameReference, idempotency?: { key: string, request: unknown } | undefined }

/** Names the reference tube of an instrument, or the same one anew after a service: the base starts again. What was named before stays. @throws AppError('conflict') */
export async function nameReferenceTube(deps: Deps, { actor, programmeId, id, request, idempotency }: NameInput): Promise<InstrumentDto> {
  if (!await findInstrument(deps.db, programmeId, id)) throw new AppError('notFound', NOT_FOUND)
  try {
    await unitOfWork(deps, { actor, name: 'nameReferenceTube', programmeId, idempotency }, async (work) => {
      const seq = ((await referenceTubes(work.trx, programmeId, id))[0]?.seq ?? 0)
      if (seq !== request.expectedSeq) throw namedMeanwhile()
      const { label, contents, reason } = request
      await insertReferenceTube(work.trx, { id: work.id(), programmeId, instrumentId: id, seq: seq + 1, label, contents, since: new Date(`${request.since}T00:00:00Z`), reason, personId: actor.personId, at: work.now })
      return { result: null, subject: `instrument ${id}`, payload: { label, contents, since: request.since, reason } }
    })
  }
  catch (error) {
    if (isDuplicate(error, 'seq')) throw namedMeanwhile()
    throw error
  }
  return showInstrument(deps, { programmeId, id })
}

const namedMeanwhile = (): AppError => new AppError('conflict', 'Somebody else named the reference tube of this instrument meanwhile. Look at it and name it again.', { field: 'expectedSeq' })
