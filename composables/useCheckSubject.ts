import type { AgentDto } from '#shared/schemas/agent'
import type { BatchDto } from '#shared/schemas/batch'
import type { CheckDto } from '#shared/schemas/check'
import type { FitDto } from '#shared/schemas/fit'
import type { RecordDto } from '#shared/schemas/record'
import type { SeriesDto } from '#shared/schemas/series'
import type { EvidenceItemDto } from '#shared/evidence/item'

export type CheckedSubject =
  | { kind: 'fit', series: SeriesDto, fit: FitDto, evidence: readonly EvidenceItemDto[] }
  | { kind: 'record', record: RecordDto, evidence: readonly EvidenceItemDto[] }
  | { kind: 'batchVersion', lot: string, version: BatchDto['versions'][number], evidence: readonly EvidenceItemDto[] }

/** What one check is about, read from the pages' own routes: the fit with its series, the record, or the batch version. */
export async function readCheckedSubject(check: CheckDto, programmeCode: string): Promise<CheckedSubject> {
  const read = useRequestFetch()
  const base = `/api/programmes/${programmeCode}`
  if (check.kind === 'fit') {
    const url = `${base}/series/${check.chainId}`
    const [series, fit] = await Promise.all([read<SeriesDto>(url), read<FitDto>(`${url}/fits/${check.versionNo}`)])
    return { kind: 'fit', series, fit, evidence: fit.evidence }
  }
  if (check.kind === 'record') {
    const record = await read<RecordDto>(`${base}/records/${check.id}`)
    return { kind: 'record', record, evidence: record.evidence }
  }
  const { batches, evidence } = await read<AgentDto>(`${base}/agents/${encodeURIComponent(check.agentCode ?? '')}`)
  const batch = batches.find(one => one.id === check.chainId)
  const version = batch?.versions.find(one => one.id === check.id)
  if (!batch || !version) throw createError({ statusCode: 404, message: 'There is no such batch version, or it is not open to you.' })
  return { kind: 'batchVersion', lot: batch.lot, version, evidence: evidence.filter(item => item.origin.id === check.id) }
}
