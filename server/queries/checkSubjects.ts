import type { Knex } from 'knex'
import type { CheckSubjectKind } from '../../shared/checks/transitions'
import { fromBinary, fromBinaryOrNull, toBinary } from '../platform/ids'

/** What signing needs to know of a fit version, a record version or a batch version, whatever it is. */
export interface CheckSubject {
  kind: CheckSubjectKind
  id: string
  chainId: string
  versionNo: number
  newestVersionNo: number
  complexId: string | null
  agentCode: string | null
  /** Measurement kind or record kind; 'batch' for a batch version. */
  what: string
  title: string
  /** Canonical text of conditions, '{}' where there are none. */
  conditions: string
  /** Everyone who uploaded it, entered its concentrations or conditions, or typed any version of it. */
  enteredBy: { personId: string, name: string }[]
  /** Who asked for this version of a fit; null for what is typed, which its authors made. */
  madeBy: string | null
  /** Why nothing more can happen to it; null = it stands. */
  barred: 'refused' | 'withdrawn' | 'replaced' | null
}

export async function findCheckSubject(db: Knex, programmeId: string, kind: CheckSubjectKind, id: string): Promise<CheckSubject | null> {
  const found = kind === 'fit' ? await fitSubject(db, programmeId, id) : kind === 'record' ? await recordSubject(db, programmeId, id) : await batchSubject(db, programmeId, id)
  return found
}

interface FitRaw { id: Buffer, requested_by: Buffer, series_id: Buffer, version_no: number, outcome: 'ok' | 'refused', kind: string, title: string, conditions: string, complex_id: Buffer, code: string, newest: number, withdrawn: number, replaced: number }

async function fitSubject(db: Knex, programmeId: string, id: string): Promise<CheckSubject | null> {
  const row = await db('fit as f').join('series as s', 's.id', 'f.series_id').join('complex as c', 'c.id', 's.complex_id')
    .where('f.programme_id', toBinary(programmeId)).where('f.id', toBinary(id))
    .first('f.id', 'f.series_id', 'f.version_no', 'f.outcome', 'f.requested_by', 's.kind', 's.title', 's.conditions', 's.complex_id', 'c.code',
      db.raw('(SELECT MAX(n.version_no) FROM fit n WHERE n.series_id = f.series_id) AS newest'),
      db.raw('EXISTS(SELECT 1 FROM series_event w WHERE w.series_id = f.series_id AND w.event = \'withdrawn\') AS withdrawn'),
      db.raw('EXISTS(SELECT 1 FROM series n WHERE n.replaces = f.series_id) AS replaced')) as FitRaw | undefined
  if (!row) return null
  return {
    kind: 'fit', id, chainId: fromBinary(row.series_id), versionNo: row.version_no, newestVersionNo: Number(row.newest), complexId: fromBinary(row.complex_id), agentCode: row.code,
    what: row.kind, title: row.title, conditions: row.conditions, enteredBy: await seriesAuthors(db, row.series_id), madeBy: fromBinary(row.requested_by),
    barred: row.outcome === 'refused' ? 'refused' : row.withdrawn ? 'withdrawn' : row.replaced ? 'replaced' : null,
  }
}

/** Uploader and everyone who entered or corrected conditions, along the whole line of series that this one replaces. */
async function seriesAuthors(db: Knex, seriesId: Buffer): Promise<{ personId: string, name: string }[]> {
  const [rows] = await db.raw(`WITH RECURSIVE line AS (
      SELECT id, replaces, created_by, upload_id FROM series WHERE id = ?
      UNION ALL SELECT s.id, s.replaces, s.created_by, s.upload_id FROM series s JOIN line l ON s.id = l.replaces)
    SELECT DISTINCT p.id, p.name FROM (SELECT created_by AS person_id FROM line UNION SELECT u.uploaded_by FROM line JOIN upload u ON u.id = line.upload_id) a
    JOIN person p ON p.id = a.person_id ORDER BY p.name`, [seriesId]) as [{ id: Buffer, name: string }[]]
  return rows.map(row => ({ personId: fromBinary(row.id), name: row.name }))
}

interface RecordRaw { root_id: Buffer, version_no: number, kind: string, conditions: string, complex_id: Buffer | null, code: string | null, ligand_code: string | null, newest: number }

async function recordSubject(db: Knex, programmeId: string, id: string): Promise<CheckSubject | null> {
  const row = await db('record as r').leftJoin('complex as c', 'c.id', 'r.complex_id').leftJoin('ligand as l', 'l.id', 'r.ligand_id')
    .where('r.programme_id', toBinary(programmeId)).where('r.id', toBinary(id))
    .first('r.root_id', 'r.version_no', 'r.kind', 'r.conditions', 'r.complex_id', 'c.code', 'l.code as ligand_code',
      db.raw('(SELECT MAX(n.version_no) FROM record n WHERE n.root_id = r.root_id) AS newest')) as RecordRaw | undefined
  if (!row) return null
  return {
    kind: 'record', id, chainId: fromBinary(row.root_id), versionNo: row.version_no, newestVersionNo: Number(row.newest), complexId: fromBinaryOrNull(row.complex_id),
    agentCode: row.code ?? row.ligand_code, what: row.kind, title: row.kind, conditions: row.conditions, enteredBy: await authors(db, 'record', 'root_id', row.root_id), madeBy: null, barred: null,
  }
}

interface BatchRaw { batch_id: Buffer, version_no: number, lot: string, complex_id: Buffer, code: string, newest: number }

async function batchSubject(db: Knex, programmeId: string, id: string): Promise<CheckSubject | null> {
  const row = await db('batch_version as v').join('batch as b', 'b.id', 'v.batch_id').join('complex as c', 'c.id', 'b.complex_id')
    .where('v.programme_id', toBinary(programmeId)).where('v.id', toBinary(id))
    .first('v.batch_id', 'v.version_no', 'b.lot', 'b.complex_id', 'c.code', db.raw('(SELECT MAX(n.version_no) FROM batch_version n WHERE n.batch_id = v.batch_id) AS newest')) as BatchRaw | undefined
  if (!row) return null
  return {
    kind: 'batchVersion', id, chainId: fromBinary(row.batch_id), versionNo: row.version_no, newestVersionNo: Number(row.newest), complexId: fromBinary(row.complex_id), agentCode: row.code,
    what: 'batch', title: `Batch ${row.lot}`, conditions: '{}', enteredBy: await authors(db, 'batch_version', 'batch_id', row.batch_id), madeBy: null, barred: null,
  }
}

async function authors(db: Knex, table: 'record' | 'batch_version', chain: string, chainId: Buffer): Promise<{ personId: string, name: string }[]> {
  const rows = await db(`${table} as t`).join('person as p', 'p.id', 't.created_by').where(`t.${chain}`, chainId).distinct('p.id', 'p.name').orderBy('p.name') as { id: Buffer, name: string }[]
  return rows.map(row => ({ personId: fromBinary(row.id), name: row.name }))
}
