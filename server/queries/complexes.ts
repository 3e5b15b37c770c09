import type { Knex } from 'knex'
import type { CheckState } from '../../shared/checks/transitions'
import { fromBinary, toBinary } from '../platform/ids'

export interface ComplexRow { id: string, code: string, ligandId: string, ligandCode: string, personName: string, at: Date }
interface Raw { id: Buffer, code: string, ligand_id: Buffer, ligand_code: string, name: string, created_at: Date }

const complexes = (db: Knex, programmeId: string) => db('complex as c').join('ligand as l', 'l.id', 'c.ligand_id').join('person as p', 'p.id', 'c.created_by').where('c.programme_id', toBinary(programmeId))
const COLUMNS = ['c.id', 'c.code', 'c.ligand_id', 'l.code as ligand_code', 'p.name', 'c.created_at'] as const
const toComplex = (row: Raw): ComplexRow => ({ id: fromBinary(row.id), code: row.code, ligandId: fromBinary(row.ligand_id), ligandCode: row.ligand_code, personName: row.name, at: row.created_at })

/** @throws a duplicate on the key `code` when the code is taken in this programme */
export async function insertComplex(trx: Knex, one: { id: string, programmeId: string, code: string, ligandId: string, personId: string, at: Date }): Promise<void> {
  await trx('complex').insert({ id: toBinary(one.id), programme_id: toBinary(one.programmeId), code: one.code, ligand_id: toBinary(one.ligandId), created_by: toBinary(one.personId), created_at: one.at })
}

/** `latest`: read past the snapshot of a transaction, as after a duplicate. */
export async function findComplex(db: Knex, programmeId: string, by: { code: string } | { id: string }, { latest = false } = {}): Promise<ComplexRow | null> {
  const query = complexes(db, programmeId).where('code' in by ? { 'c.code': by.code } : { 'c.id': toBinary(by.id) })
  const row = await (latest ? query.forShare() : query).first(COLUMNS) as Raw | undefined
  return row ? toComplex(row) : null
}

export async function listComplexRows(db: Knex, programmeId: string): Promise<ComplexRow[]> {
  const rows = await complexes(db, programmeId).orderBy('c.code').select(COLUMNS) as Raw[]
  return rows.map(toComplex)
}

export interface AgentSeriesRow { id: string, title: string, kind: string, lot: string, at: Date, personName: string, newestVersionNo: number | null, newestOutcome: 'ok' | 'refused' | null, newestFitId: string | null, checkState: CheckState, isSigned: boolean }
interface SeriesRaw { id: Buffer, title: string, kind: string, lot: string, created_at: Date, name: string, version_no: number | null, outcome: 'ok' | 'refused' | null, fit_id: Buffer | null, state: CheckState | null, signed: number }

/** Series of one agent that stand (neither withdrawn nor replaced), newest first, each with its newest fit and whether any of its fits is signed. */
export async function agentSeries(db: Knex, programmeId: string, complexId: string, { signedOnly = false } = {}): Promise<AgentSeriesRow[]> {
  const rows = await db('series as s').join('batch as b', 'b.id', 's.batch_id').join('person as p', 'p.id', 's.created_by')
    .leftJoin('fit as f', join => join.on('f.series_id', 's.id').andOn('f.version_no', db.raw('(SELECT MAX(n.version_no) FROM fit n WHERE n.series_id = s.id)')))
    .leftJoin('check_current as k', 'k.subject_id', 'f.id')
    .where('s.programme_id', toBinary(programmeId)).where('s.complex_id', toBinary(complexId))
    .whereNotExists(db('series_event as w').whereRaw('w.series_id = s.id').where('w.event', 'withdrawn').select(db.raw('1')))
    .whereNotExists(db('series as r').whereRaw('r.replaces = s.id').select(db.raw('1')))
    .orderBy('s.created_at', 'desc').orderBy('s.id', 'desc')
    .select('s.id', 's.title', 's.kind', 'b.lot', 's.created_at', 'p.name', 'f.version_no', 'f.outcome', 'f.id as fit_id', 'k.state',
      db.raw('EXISTS(SELECT 1 FROM fit sf JOIN check_current c ON c.subject_id = sf.id WHERE sf.series_id = s.id AND c.state = \'signed\') AS `signed`')) as SeriesRaw[]
  const all = rows.map(row => ({
    id: fromBinary(row.id), title: row.title, kind: row.kind, lot: row.lot, at: row.created_at, personName: row.name, newestVersionNo: row.version_no, newestOutcome: row.outcome,
    newestFitId: row.fit_id ? fromBinary(row.fit_id) : null, checkState: row.state ?? 'draft', isSigned: Boolean(row.signed),
  }))
  return signedOnly ? all.filter(one => one.isSigned) : all
}

export interface AgentDecisionRow { id: string, complexId: string, outcome: 'advance' | 'hold' | 'stop', reasons: string, personName: string, at: Date }

/** Decisions, newest first; of one agent, or of all. */
export async function agentDecisions(db: Knex, programmeId: string, complexId?: string): Promise<AgentDecisionRow[]> {
  const rows = await db('decision as d').join('person as p', 'p.id', 'd.person_id').where('d.programme_id', toBinary(programmeId))
    .modify((query) => { if (complexId) void query.where('d.complex_id', toBinary(complexId)) })
    .orderBy('d.at', 'desc').orderBy('d.id', 'desc').select('d.id', 'd.complex_id', 'd.outcome', 'd.reasons', 'p.name', 'd.at') as { id: Buffer, complex_id: Buffer, outcome: AgentDecisionRow['outcome'], reasons: string, name: string, at: Date }[]
  return rows.map(row => ({ id: fromBinary(row.id), complexId: fromBinary(row.complex_id), outcome: row.outcome, reasons: row.reasons, personName: row.name, at: row.at }))
}

/** Number of series of each agent that stand. */
export async function countSeries(db: Knex, programmeId: string): Promise<Map<string, number>> {
  const rows = await db('series as s').where('s.programme_id', toBinary(programmeId))
    .whereNotExists(db('series_event as w').whereRaw('w.series_id = s.id').where('w.event', 'withdrawn').select(db.raw('1')))
    .whereNotExists(db('series as r').whereRaw('r.replaces = s.id').select(db.raw('1')))
    .groupBy('s.complex_id').select('s.complex_id').count({ n: '*' }) as unknown as { complex_id: Buffer, n: number }[]
  return new Map(rows.map(row => [fromBinary(row.complex_id), Number(row.n)]))
}
