import type { Knex } from 'knex'
import type { DecisionSnapshot } from '../../shared/schemas/decision'
import { hex } from '../platform/hashes'
import { fromBinary, fromBinaryOrNull, toBinary, toBinaryOrNull } from '../platform/ids'

export type Outcome = 'advance' | 'hold' | 'stop'
export interface DecisionRow {
  id: string, complexId: string, agentCode: string, profileVersionId: string, profileName: string, profileVersionNo: number, outcome: Outcome, reasons: string
  supersedes: string | null, supersededBy: string | null, personId: string, personName: string, at: Date
}
interface Raw {
  id: Buffer, complex_id: Buffer, code: string, profile_version_id: Buffer, profile_name: string, profile_version_no: number, outcome: Outcome, reasons: string
  supersedes: Buffer | null, superseded_by: Buffer | null, person_id: Buffer, person_name: string, at: Date
}

const decisions = (db: Knex, programmeId: string) => db('decision as d').join('complex as c', 'c.id', 'd.complex_id').join('person as w', 'w.id', 'd.person_id')
  .join('profile_version as v', 'v.id', 'd.profile_version_id').join('profile as p', 'p.id', 'v.profile_id').where('d.programme_id', toBinary(programmeId))

const COLUMNS = (db: Knex) => ['d.id', 'd.complex_id', 'c.code', 'd.profile_version_id', 'p.name as profile_name', 'v.version_no as profile_version_no', 'd.outcome', 'd.reasons', 'd.supersedes',
  db.raw('(SELECT n.id FROM decision n WHERE n.supersedes = d.id) AS superseded_by'), 'd.person_id', 'w.name as person_name', 'd.at']

const toRow = (row: Raw): DecisionRow => ({
  id: fromBinary(row.id), complexId: fromBinary(row.complex_id), agentCode: row.code, profileVersionId: fromBinary(row.profile_version_id), profileName: row.profile_name,
  profileVersionNo: row.profile_version_no, outcome: row.outcome, reasons: row.reasons, supersedes: fromBinaryOrNull(row.supersedes), supersededBy: fromBinaryOrNull(row.superseded_by),
  personId: fromBinary(row.person_id), personName: row.person_name, at: row.at,
})

/** Decisions, newest first; of one agent, or of all. */
export async function listDecisionRows(db: Knex, programmeId: string, complexId?: string): Promise<DecisionRow[]> {
  const rows = await decisions(db, programmeId).modify((query) => { if (complexId) void query.where('d.complex_id', toBinary(complexId)) })
    .orderBy('d.at', 'desc').orderBy('d.id', 'desc').select(COLUMNS(db)) as Raw[]
  return rows.map(toRow)
}

/** The decision that stands for an agent: the one nothing supersedes. `latest` reads past the snapshot of a transaction. */
export async function standingDecision(db: Knex, programmeId: string, complexId: string, { latest = false } = {}): Promise<DecisionRow | null> {
  const query = decisions(db, programmeId).where('d.complex_id', toBinary(complexId)).whereNotExists(db('decision as s').whereRaw('s.supersedes = d.id').select(db.raw('1')))
  const row = await (latest ? query.forShare() : query).first(COLUMNS(db)) as Raw | undefined
  return row ? toRow(row) : null
}

export async function findDecision(db: Knex, programmeId: string, id: string): Promise<(DecisionRow & { snapshot: DecisionSnapshot, snapshotHash: string }) | null> {
  const row = await decisions(db, programmeId).where('d.id', toBinary(id)).first([...COLUMNS(db), 'd.snapshot', 'd.snapshot_hash']) as (Raw & { snapshot: string, snapshot_hash: Buffer }) | undefined
  return row ? { ...toRow(row), snapshot: JSON.parse(row.snapshot) as DecisionSnapshot, snapshotHash: hex(row.snapshot_hash) } : null
}

export interface NewDecision { id: string, programmeId: string, complexId: string, profileVersionId: string, outcome: Outcome, reasons: string, snapshot: { text: string, hash: Buffer }, supersedes: string | null, personId: string, at: Date, evidenceIds: readonly string[] }

/** @throws a duplicate on the key `successor` when somebody else decided on the same agent, or superseded the same decision, first */
export async function insertDecision(trx: Knex, one: NewDecision): Promise<void> {
  const programme = toBinary(one.programmeId)
  await trx('decision').insert({
    id: toBinary(one.id), programme_id: programme, complex_id: toBinary(one.complexId), profile_version_id: toBinary(one.profileVersionId), outcome: one.outcome, reasons: one.reasons,
    snapshot: one.snapshot.text, snapshot_hash: one.snapshot.hash, supersedes: toBinaryOrNull(one.supersedes), person_id: toBinary(one.personId), at: one.at,
  })
  if (one.evidenceIds.length > 0) await trx('decision_evidence').insert(one.evidenceIds.map(id => ({ programme_id: programme, decision_id: toBinary(one.id), evidence_id: toBinary(id) })))
}

/** Who signed which subject and when; for a snapshot. */
export async function signaturesOf(db: Knex, programmeId: string, subjectIds: readonly string[]): Promise<{ subjectKind: string, subjectId: string, personId: string, personName: string, at: Date }[]> {
  if (subjectIds.length === 0) return []
  const rows = await db('check_event as e').join('person as p', 'p.id', 'e.person_id').where('e.programme_id', toBinary(programmeId)).whereIn('e.subject_id', subjectIds.map(toBinary))
    .whereIn('e.event', ['signed', 'firstSigned']).orderBy('e.at').orderBy('e.id').select('e.fit_id', 'e.record_id', 'e.subject_id', 'e.person_id', 'p.name', 'e.at') as { fit_id: Buffer | null, record_id: Buffer | null, subject_id: Buffer, person_id: Buffer, name: string, at: Date }[]
  return rows.map(row => ({ subjectKind: row.fit_id ? 'fit' : row.record_id ? 'record' : 'batchVersion', subjectId: fromBinary(row.subject_id), personId: fromBinary(row.person_id), personName: row.name, at: row.at }))
}
