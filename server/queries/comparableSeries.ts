import type { Knex } from 'knex'
import type { CheckState } from '../../shared/checks/transitions'
import type { AnalysisOutcome, Conditions } from '../../shared/measurements/types'
import { fromBinary, toBinary } from '../platform/ids'
import { WITHDRAWN } from './series'

export interface ComparableFit { seriesId: string, kind: string, title: string, batchId: string, lot: string, at: Date, conditions: Conditions, versionNo: number, state: CheckState, outcome: AnalysisOutcome }
interface Raw { series_id: Buffer, kind: string, title: string, batch_id: Buffer, lot: string, at: Date, conditions: string, version_no: number, state: CheckState | null, result: string }

const COUNTS = `COALESCE(
  (SELECT MAX(v.version_no) FROM fit v JOIN check_current k ON k.subject_id = v.id AND k.state = 'signed' WHERE v.series_id = s.id),
  (SELECT MAX(v.version_no) FROM fit v WHERE v.series_id = s.id AND v.outcome = 'ok'))`

/** The version that counts (newest signed, else newest) of every standing series of an agent, of one kind where it is named, oldest series first. */
export async function comparableFits(db: Knex, programmeId: string, { complexId, kind }: { complexId: string, kind?: string }): Promise<ComparableFit[]> {
  const rows = await db('series as s').join('batch as b', 'b.id', 's.batch_id').join('fit as f', join => join.on('f.series_id', 's.id').andOn('f.version_no', db.raw(COUNTS)))
    .leftJoin('check_current as c', 'c.subject_id', 'f.id')
    .where({ 's.programme_id': toBinary(programmeId), 's.complex_id': toBinary(complexId), 'f.outcome': 'ok' })
    .modify((query) => { if (kind !== undefined) void query.where('s.kind', kind) })
    .whereRaw(`NOT EXISTS (${WITHDRAWN})`).whereNotExists(db('series as n').whereRaw('n.replaces = s.id').select(db.raw('1')))
    .orderBy('s.created_at').orderBy('s.id').limit(kind === undefined ? 60 : 20)
    .select('s.id as series_id', 's.kind', 's.title', 's.batch_id', 'b.lot', 's.created_at as at', 's.conditions', 'f.version_no', 'c.state', 'f.result') as Raw[]
  return rows.map(row => ({
    seriesId: fromBinary(row.series_id), kind: row.kind, title: row.title, batchId: fromBinary(row.batch_id), lot: row.lot, at: row.at, conditions: JSON.parse(row.conditions) as Conditions, versionNo: row.version_no, state: row.state ?? 'draft',
    outcome: JSON.parse(row.result) as AnalysisOutcome,
  }))
}
