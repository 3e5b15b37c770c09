import type { Knex } from 'knex'
import type { CheckEvent, CheckState, CheckSubjectKind } from '../../shared/checks/transitions'
import { fromBinary, toBinary } from '../platform/ids'

export interface CheckCurrent { subjectId: string, kind: CheckSubjectKind, state: CheckState, seq: number, personId: string, since: Date }
export interface CheckEventRow { seq: number, event: CheckEvent, comment: string, personId: string, personName: string, at: Date }

/** Where the check of a subject stands; draft with seq 0 when nothing happened yet. `lock` holds it until the transaction ends. */
export async function findCheckState(db: Knex, programmeId: string, subjectId: string, { lock = false } = {}): Promise<{ state: CheckState, seq: number, since: Date | null }> {
  const query = db('check_current').where({ subject_id: toBinary(subjectId), programme_id: toBinary(programmeId) })
  const row = await (lock ? query.forUpdate() : query).first('state', 'seq', 'since') as { state: CheckState, seq: number, since: Date } | undefined
  return row ?? { state: 'draft', seq: 0, since: null }
}

export async function checkEvents(db: Knex, programmeId: string, subjectId: string): Promise<CheckEventRow[]> {
  const rows = await db('check_event as e').join('person as p', 'p.id', 'e.person_id').where('e.programme_id', toBinary(programmeId)).where('e.subject_id', toBinary(subjectId))
    .orderBy('e.seq').select('e.seq', 'e.event', 'e.comment', 'e.person_id', 'p.name', 'e.at') as { seq: number, event: CheckEvent, comment: string, person_id: Buffer, name: string, at: Date }[]
  return rows.map(row => ({ seq: row.seq, event: row.event, comment: row.comment, personId: fromBinary(row.person_id), personName: row.name, at: row.at }))
}

export interface NewCheckEvent { id: string, programmeId: string, kind: CheckSubjectKind, subjectId: string, seq: number, event: CheckEvent, comment: string, personId: string, at: Date }

/** Appends a step and moves the subject's current state with it. Two steps with one seq meet on the unique key `step`. */
export async function appendCheckEvent(trx: Knex.Transaction, one: NewCheckEvent): Promise<void> {
  const subject = toBinary(one.subjectId)
  await trx('check_event').insert({
    id: toBinary(one.id), programme_id: toBinary(one.programmeId), fit_id: one.kind === 'fit' ? subject : null, record_id: one.kind === 'record' ? subject : null,
    batch_version_id: one.kind === 'batchVersion' ? subject : null, seq: one.seq, event: one.event, comment: one.comment, person_id: toBinary(one.personId), at: one.at,
  })
  const current = { state: one.event, seq: one.seq, person_id: toBinary(one.personId), since: one.at }
  const changed = await trx('check_current').where({ subject_id: subject }).update(current)
  if (changed === 0) await trx('check_current').insert({ subject_id: subject, programme_id: toBinary(one.programmeId), subject_kind: one.kind, ...current })
}

/** Subjects of a programme in given states, longest waiting first. */
export async function currentChecks(db: Knex, programmeId: string, states: readonly CheckState[]): Promise<CheckCurrent[]> {
  const rows = await db('check_current').where({ programme_id: toBinary(programmeId) }).whereIn('state', states).orderBy('since').orderBy('subject_id')
    .select('subject_id', 'subject_kind', 'state', 'seq', 'person_id', 'since') as { subject_id: Buffer, subject_kind: CheckSubjectKind, state: CheckState, seq: number, person_id: Buffer, since: Date }[]
  return rows.map(row => ({ subjectId: fromBinary(row.subject_id), kind: row.subject_kind, state: row.state, seq: row.seq, personId: fromBinary(row.person_id), since: row.since }))
}

export interface ChainPlace { programmeId: string, kind: CheckSubjectKind, chainId: string, exceptId: string }
export interface WaitingSibling { subjectId: string, seq: number, versionNo: number }

/** Versions of one chain that wait for a check, other than the one given, oldest first. `lock` holds them until the transaction ends. */
export async function waitingSiblings(db: Knex, { programmeId, kind, chainId, exceptId }: ChainPlace, { lock = false } = {}): Promise<WaitingSibling[]> {
  const { table, chain } = CHAINS[kind]
  // Two steps: the application may not lock rows of the append-only tables that a join would bring in.
  const versions = await db(table).where({ programme_id: toBinary(programmeId), [chain]: toBinary(chainId) }).whereNot('id', toBinary(exceptId)).select('id', 'version_no') as { id: Buffer, version_no: number }[]
  const query = db('check_current').where({ programme_id: toBinary(programmeId) }).whereIn('subject_id', versions.map(one => one.id)).whereIn('state', ['waiting', 'firstSigned'])
  const rows = await (lock ? query.forUpdate() : query).select('subject_id', 'seq') as { subject_id: Buffer, seq: number }[]
  const numberOf = (id: Buffer): number => versions.find(one => one.id.equals(id))!.version_no
  return rows.map(row => ({ subjectId: fromBinary(row.subject_id), seq: row.seq, versionNo: numberOf(row.subject_id) })).sort((one, other) => one.versionNo - other.versionNo)
}

/** Where each kind of subject is stored and which column names its chain of versions. */
export const CHAINS = {
  fit: { table: 'fit', chain: 'series_id' },
  record: { table: 'record', chain: 'root_id' },
  batchVersion: { table: 'batch_version', chain: 'batch_id' },
} as const satisfies Record<CheckSubjectKind, { table: string, chain: string }>
