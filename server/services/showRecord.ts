import { recordKind } from '../../shared/evidence/records/index'
import type { Scope } from '../../shared/permissions'
import type { RecordDto, RecordRowDto } from '../../shared/schemas/record'
import type { Deps } from '../platform/deps'
import { checkEvents } from '../queries/checks'
import { readEvidence } from '../queries/evidence'
import { findComplex } from '../queries/complexes'
import { findRecord, listRecordRows, recordChain, type RecordRow } from '../queries/records'
import { listSourceRows, type SourceRow } from '../queries/sources'
import { noSuchAgent, noSuchRecord } from './registryWords'

export function toRecordRow(row: RecordRow): RecordRowDto {
  const kind = recordKind(row.kind)
  return {
    id: row.id, rootId: row.rootId, versionNo: row.versionNo, newestVersionNo: row.newestVersionNo, kind: row.kind, title: kind?.title ?? row.kind,
    summary: kind?.summarise(row.payload.entry, { metal: row.payload.metal }) ?? '', conditions: kind?.describe(row.conditions) ?? '', agent: row.complexCode, lot: row.lot, source: row.source,
    by: row.personName, at: row.at.toISOString(), checkState: row.checkState, checkSeq: row.checkSeq,
  }
}

/** The newest version of each record of a programme, or of one agent; partners see signed ones. */
export async function listRecords(deps: Pick<Deps, 'db'>, { programmeId, scope, agent }: { programmeId: string, scope: Scope, agent?: string | undefined }): Promise<{ records: RecordRowDto[] }> {
  const complex = agent === undefined ? undefined : await findComplex(deps.db, programmeId, { code: agent })
  if (complex === null) throw noSuchAgent()
  const rows = await listRecordRows(deps.db, programmeId, scope, complex?.id)
  return { records: rows.map(toRecordRow) }
}

/** One version of a record with its chain, its evidence and, for staff, what came back with it. */
export async function showRecord(deps: Pick<Deps, 'db'>, { programmeId, scope, id }: { programmeId: string, scope: Scope, id: string }): Promise<RecordDto> {
  const row = await findRecord(deps.db, programmeId, id, scope)
  if (!row) throw noSuchRecord()
  const chain = await recordChain(deps.db, programmeId, row.rootId, scope)
  const evidence = (await readEvidence(deps.db, programmeId, scope, { complexId: row.complexId })).filter(item => item.origin.kind === 'record' && item.origin.id === row.id)
  const events = scope === 'signed' ? [] : await checkEvents(deps.db, programmeId, row.id)
  const returned = events.at(-1)?.event === 'returned' ? events.at(-1)! : null
  return {
    ...toRecordRow(row),
    // a partner is not told of versions beyond those they see
    newestVersionNo: chain[0]?.versionNo ?? row.versionNo,
    entry: row.payload.entry, metal: row.payload.metal, reason: row.payload.reason, evidence,
    versions: chain.map(one => ({ id: one.id, versionNo: one.versionNo, by: one.personName, at: one.at.toISOString(), reason: one.payload.reason, summary: toRecordRow(one).summary, checkState: one.checkState })),
    returnComment: returned ? { comment: returned.comment, by: returned.personName, at: returned.at.toISOString() } : null,
  }
}

export async function listSources(deps: Pick<Deps, 'db'>, { programmeId }: { programmeId: string }): Promise<{ sources: SourceRow[] }> {
  const rows = await listSourceRows(deps.db, programmeId)
  const seen = new Set<string>()
  return { sources: rows.filter(({ citation, origin }) => !seen.has(`${origin} ${citation}`) && seen.add(`${origin} ${citation}`)) }
}
