import type { Knex } from 'knex'
import type { GapKey } from '../../shared/schemas/gap'
import { fromBinary, fromBinaryOrNull, toBinary, toBinaryOrNull } from '../platform/ids'

export interface GapAssignmentRow { complexId: string, key: GapKey, seq: number, assigneeId: string | null, assignee: string | null, due: string | null, note: string | null, byName: string, at: Date }
interface Raw { complex_id: Buffer, gap_key: GapKey, seq: number, assignee: Buffer | null, assignee_name: string | null, due_day: string | null, note: string | null, by_name: string, created_at: Date }

const rowsOf = (db: Knex, programmeId: string) => db('gap_assignment as g').join('person as b', 'b.id', 'g.created_by').leftJoin('person as a', 'a.id', 'g.assignee').where('g.programme_id', toBinary(programmeId))
const columns = (db: Knex) => ['g.complex_id', 'g.gap_key', 'g.seq', 'g.assignee', 'a.name as assignee_name', db.raw('DATE_FORMAT(g.due, \'%Y-%m-%d\') AS due_day'), 'g.note', 'b.name as by_name', 'g.created_at']
const toRow = (row: Raw): GapAssignmentRow => ({
  complexId: fromBinary(row.complex_id), key: row.gap_key, seq: row.seq, assigneeId: fromBinaryOrNull(row.assignee), assignee: row.assignee_name, due: row.due_day, note: row.note, byName: row.by_name, at: row.created_at,
})

/** The newest assignment of every gap that ever had one. */
export async function currentAssignments(db: Knex, programmeId: string): Promise<GapAssignmentRow[]> {
  const rows = await rowsOf(db, programmeId).whereNotExists(db('gap_assignment as n').whereRaw('n.complex_id = g.complex_id AND n.gap_key = g.gap_key AND n.seq > g.seq').select(db.raw('1'))).select(columns(db)) as Raw[]
  return rows.map(toRow)
}

/** The newest assignment of one gap. `latest` reads past the snapshot of a transaction, as after a duplicate. */
export async function currentAssignment(db: Knex, programmeId: string, { complexId, key }: { complexId: string, key: GapKey }, { latest = false } = {}): Promise<GapAssignmentRow | null> {
  const query = rowsOf(db, programmeId).where({ 'g.complex_id': toBinary(complexId), 'g.gap_key': key }).orderBy('g.seq', 'desc')
  const row = await (latest ? query.forShare() : query).first(columns(db)) as Raw | undefined
  return row ? toRow(row) : null
}

export interface NewGapAssignment { id: string, programmeId: string, complexId: string, key: GapKey, seq: number, what: string, assigneeId: string | null, due: string | null, note: string | null, personId: string, at: Date }

/** @throws a duplicate on the key `seq` when somebody assigned the same gap first */
export async function insertAssignment(trx: Knex, one: NewGapAssignment): Promise<void> {
  await trx('gap_assignment').insert({
    id: toBinary(one.id), programme_id: toBinary(one.programmeId), complex_id: toBinary(one.complexId), gap_key: one.key, seq: one.seq, what: one.what, assignee: toBinaryOrNull(one.assigneeId), due: one.due, note: one.note,
    created_by: toBinary(one.personId), created_at: one.at,
  })
}
