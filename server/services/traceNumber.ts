import { AppError } from '../../shared/errors'
import type { EvidenceItemDto } from '../../shared/evidence/item'
import type { Scope } from '../../shared/permissions'
import type { TraceDto, TraceStep } from '../../shared/schemas/trace'
import type { Deps } from '../platform/deps'
import { agentMark } from '../queries/agentMarks'
import { findProgramme } from '../queries/programmes'
import { checkEvents } from '../queries/checks'
import { readEvidence } from '../queries/evidence'
import { type FitTrace, type RecordTrace, traceBatch, traceFit, traceRecord } from '../queries/trace'
import { RECORD_KINDS } from '../../shared/evidence/records/index'

interface TraceInput { programmeId: string, scope: Scope, evidenceId: string }

/**
 * "Where from?": the chain behind one number, from the value to the raw file's hash, with who did what and when.
 * A partner sees the chain of signed numbers, without file names unless the programme opened them.
 */
export async function traceNumber(deps: Deps, { programmeId, scope, evidenceId }: TraceInput): Promise<TraceDto> {
  const [item] = await readEvidence(deps.db, programmeId, scope, { ids: [evidenceId], withGone: scope === 'programme' })
  if (!item) throw new AppError('notFound', 'There is no such number, or it is not open to you.')
  const programme = await findProgramme(deps.db, programmeId)
  if (!programme) throw new Error(`There is no programme ${programmeId}.`)
  const mark = await agentMark(deps.db, programmeId, item.complexId)
  const view: View = { code: programme.code, showFile: scope !== 'signed' || programme.partnerSeesRawFiles, staff: scope !== 'signed' }
  const { steps: origin, repeat } = await originSteps(deps, programmeId, item, { ...view, agentCode: mark?.code ?? '' })
  return {
    evidenceId, quantity: item.quantity, agentCode: mark?.code ?? '', value: item.value,
    steps: [...origin.slice(0, 1), ...await checkSteps(deps, programmeId, item, view), ...origin.slice(1)],
    repeat: view.staff ? repeat : null,
  }
}

interface View { code: string, showFile: boolean, staff: boolean }

async function checkSteps(deps: Deps, programmeId: string, item: EvidenceItemDto, view: View): Promise<TraceStep[]> {
  const events = await checkEvents(deps.db, programmeId, item.origin.id)
  const signatures = events.filter(one => one.event === 'signed' || one.event === 'firstSigned')
  if (!item.signed) return view.staff ? [step('check', 'Not signed', [`The check stands at: ${item.checkState}.`])] : []
  return [step('check', 'Signed', signatures.map(one => `${one.personName}, ${moment(one.at)}`), { lit: true, href: view.staff ? `/${view.code}/checks/${item.origin.kind}/${item.origin.id}` : null })]
}

async function originSteps(deps: Deps, programmeId: string, item: EvidenceItemDto, view: View & { agentCode: string }): Promise<{ steps: TraceStep[], repeat: TraceDto['repeat'] }> {
  if (item.origin.kind === 'fit') {
    const fit = mustExist(await traceFit(deps.db, programmeId, item.origin.id))
    return { steps: fitSteps(fit, item, view), repeat: { seriesId: fit.seriesId, versionNo: fit.versionNo } }
  }
  if (item.origin.kind === 'record') return { steps: recordSteps(mustExist(await traceRecord(deps.db, programmeId, item.origin.id)), item, view), repeat: null }
  const batch = mustExist(await traceBatch(deps.db, programmeId, item.origin.id))
  const lines = [`entered by ${batch.enteredBy}, ${moment(batch.enteredAt)}`]
  return { steps: [step('batch', `Batch ${batch.lot}, version ${batch.versionNo}`, lines, { sha256: batch.payloadHash, lit: item.signed, href: `/${view.code}/agents/${encodeURIComponent(view.agentCode)}` })], repeat: null }
}

function recordSteps(record: RecordTrace, item: EvidenceItemDto, view: View): TraceStep[] {
  const title = `${RECORD_KINDS[record.kind]?.title ?? record.kind}, version ${record.versionNo}`
  return [
    step('record', title, [`entered by ${record.enteredBy}, ${moment(record.enteredAt)}`], { href: `/${view.code}/records/${record.recordId}`, sha256: record.payloadHash, lit: item.signed }),
    step('source', 'Source', [record.citation, ...(record.doi ? [`doi ${record.doi}`] : []), ...(record.origin === 'memory' ? ['from memory, not looked up'] : [])]),
  ]
}

const GONE = { withdrawn: 'withdrawn since: its numbers count no longer', replaced: 'its conditions were corrected since: its numbers count no longer' } as const

function fitSteps(fit: FitTrace, item: EvidenceItemDto, view: View): TraceStep[] {
  const file = view.showFile
    ? step('file', fit.fileName, [`${fit.fileBytes} bytes`, `uploaded by ${fit.uploadedBy}, ${moment(fit.uploadedAt)}`], { sha256: fit.fileSha256, href: `/api/programmes/${view.code}/uploads/${fit.uploadId}/file` })
    : step('file', 'Raw file', [`uploaded ${moment(fit.uploadedAt)}`], { sha256: fit.fileSha256 })
  return [
    step('fit', `Fit, version ${fit.versionNo}`, [`model ${fit.modelId}, version ${fit.modelVersion}`, `${fit.fittedBy}, ${moment(fit.fittedAt)}`, ...(fit.exclusions > 0 ? [`${fit.exclusions} left out, with reasons`] : [])],
      { href: `/${view.code}/series/${fit.seriesId}?v=${fit.versionNo}`, sha256: fit.resultHash, lit: item.signed }),
    step('series', fit.seriesTitle, [`recorded by ${fit.recordedBy}, ${moment(fit.recordedAt)}`, ...(fit.gone === null ? [] : [GONE[fit.gone]])], { href: `/${view.code}/series/${fit.seriesId}`, sha256: fit.inputHash }),
    step('tubes', `${fit.tubes} tubes, ${fit.points} points`, [], { href: `/${view.code}/series/${fit.seriesId}` }),
    file,
    step('engine', `Engine ${fit.engine.lanthorn}`, [`Node ${fit.engine.node}, V8 ${fit.engine.v8}`, `seed ${fit.seed}`]),
  ]
}

function step(id: TraceStep['id'], title: string, lines: string[], more: Partial<Pick<TraceStep, 'href' | 'sha256' | 'lit'>> = {}): TraceStep {
  return { id, title, lines, href: more.href ?? null, sha256: more.sha256 ?? null, lit: more.lit ?? false }
}

/** UTC to the minute: the same words for everyone, on paper too. */
const moment = (at: Date): string => `${at.toISOString().slice(0, 16).replace('T', ' ')} UTC`

function mustExist<T>(value: T | null): T {
  if (value === null) throw new Error('Evidence without its origin: a foreign key should have made this impossible.')
  return value
}
