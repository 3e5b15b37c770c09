import type { Knex } from 'knex'
import type { EvidenceDraft } from '../../shared/evidence/types'
import type { Scope } from '../../shared/permissions'
import { fromBinary, toBinary } from '../platform/ids'
import { signedFits, WITHDRAWN } from './series'
import type { SERIES_STATES } from '../../shared/schemas/series'

type SeriesState = (typeof SERIES_STATES)[number]

export interface SeriesListFilter { agentCode?: string | undefined, kind?: string | undefined, state?: SeriesState | undefined, before?: { at: Date, id: string } | undefined, limit: number }

export interface SeriesListRow {
  id: string
  kind: string
  title: string
  agentCode: string
  lot: string
  fileName: string
  createdByName: string
  createdAt: Date
  nTubes: number
  /** Of the newest version: what is left to do. */
  versionNo: number | null
  state: SeriesState
  /** The version whose number counts: the newest signed, else the newest. */
  standing: { fitId: string, versionNo: number, signed: boolean } | null
}

interface Raw {
  id: Buffer, kind: string, title: string, code: string, lot: string, file_name: string, creator: string, created_at: Date, n_tubes: number, version_no: number | null, state: SeriesState
  standing_id: Buffer | null, standing_no: number | null, standing_signed: number
}

const STATE = `CASE WHEN EXISTS (${WITHDRAWN}) THEN 'withdrawn' WHEN f.id IS NULL THEN 'fitting' WHEN f.outcome = 'refused' THEN 'refused' ELSE COALESCE(c.state, 'draft') END`
const NEWEST = '(SELECT MAX(v.version_no) FROM fit v WHERE v.series_id = s.id)'
const NEWEST_SIGNED = '(SELECT MAX(v.version_no) FROM fit v JOIN check_current vc ON vc.subject_id = v.id AND vc.state = \'signed\' WHERE v.series_id = s.id)'

/** Series of a programme, newest first, without their points. Series that a correction replaced are left out; a 'signed' scope sees those with a signed fit. */
export async function listSeriesRows(db: Knex, programmeId: string, scope: Scope, filter: SeriesListFilter): Promise<SeriesListRow[]> {
  const rows = await db('series as s').join('complex as x', 'x.id', 's.complex_id').join('batch as b', 'b.id', 's.batch_id').join('upload as u', 'u.id', 's.upload_id')
    .join('person as p', 'p.id', 's.created_by').leftJoin('fit as f', join => join.on('f.series_id', 's.id').andOn('f.version_no', db.raw(NEWEST)))
    .leftJoin('check_current as c', 'c.subject_id', 'f.id')
    .leftJoin('fit as g', join => join.on('g.series_id', 's.id').andOn('g.version_no', db.raw(`COALESCE(${NEWEST_SIGNED}, ${NEWEST})`)))
    .where('s.programme_id', toBinary(programmeId)).whereNotExists(db('series as n').whereRaw('n.replaces = s.id').select(db.raw('1')))
    .modify((query) => {
      if (scope === 'signed') void query.whereExists(signedFits(db))
      if (filter.agentCode) void query.where('x.code', filter.agentCode)
      if (filter.kind) void query.where('s.kind', filter.kind)
      if (filter.state) void query.whereRaw(`${STATE} = ?`, [filter.state])
      if (filter.before) void query.whereRaw('(s.created_at, s.id) < (?, ?)', [filter.before.at, toBinary(filter.before.id)])
    })
    .orderBy('s.created_at', 'desc').orderBy('s.id', 'desc').limit(filter.limit)
    .select('s.id', 's.kind', 's.title', 'x.code', 'b.lot', 'u.file_name', 'p.name as creator', 's.created_at', 'f.version_no', db.raw(`${STATE} AS state`), 'g.id as standing_id',
      'g.version_no as standing_no', db.raw(`(${NEWEST_SIGNED} IS NOT NULL) AS standing_signed`), db.raw('(SELECT COUNT(*) FROM tube t WHERE t.series_id = s.id) AS n_tubes')) as Raw[]
  return rows.map(toRow)
}

const toRow = (row: Raw): SeriesListRow => ({
  id: fromBinary(row.id), kind: row.kind, title: row.title, agentCode: row.code, lot: row.lot, fileName: row.file_name, createdByName: row.creator, createdAt: row.created_at,
  nTubes: Number(row.n_tubes), versionNo: row.version_no, state: row.state,
  standing: row.standing_id === null ? null : { fitId: fromBinary(row.standing_id), versionNo: row.standing_no!, signed: Boolean(row.standing_signed) },
})

/** Agents and kinds that the programme's series are of: the choices of the filter. */
export async function seriesChoices(db: Knex, programmeId: string, scope: Scope): Promise<{ agents: string[], kinds: string[] }> {
  const visible = () => db('series as s').join('complex as x', 'x.id', 's.complex_id').where('s.programme_id', toBinary(programmeId))
    .modify((query) => { if (scope === 'signed') void query.whereExists(signedFits(db)) })
  const agents = await visible().distinct('x.code').orderBy('x.code').pluck('x.code') as string[]
  const kinds = await visible().distinct('s.kind').orderBy('s.kind').pluck('s.kind') as string[]
  return { agents, kinds }
}

/** First evidence of each fit: what the list shows as its number. */
export async function headlinesOf(db: Knex, programmeId: string, fitIds: readonly string[]): Promise<Map<string, { evidenceId: string, draft: EvidenceDraft }>> {
  const rows = fitIds.length === 0
    ? []
    : await db('evidence').where('programme_id', toBinary(programmeId)).whereIn('fit_id', fitIds.map(toBinary)).orderBy('id', 'desc').select('id', 'fit_id', 'payload') as { id: Buffer, fit_id: Buffer, payload: string }[]
  return new Map(rows.map(row => [fromBinary(row.fit_id), { evidenceId: fromBinary(row.id), draft: JSON.parse(row.payload) as EvidenceDraft }]))
}
