import type { Knex } from 'knex'
import type { Change } from '../../shared/map/ground'
import { isDuplicate } from '../platform/database'
import { sealed } from '../platform/hashes'
import { fromBinary, toBinary } from '../platform/ids'

export interface NoticeRow { id: string, decisionId: string, cause: string, changes: Change[], by: string | null, at: Date, ack: { by: string, at: Date, note: string } | null }
interface Raw { id: Buffer, decision_id: Buffer, cause: string, payload: string, at: Date, ack_by: string | null, ack_at: Date | null, ack_note: string | null }

/** @returns false when this cause was noticed for this decision before */
export async function insertNotice(trx: Knex, one: { id: string, programmeId: string, decisionId: string, cause: string, changes: Change[], by: string | null, at: Date }): Promise<boolean> {
  try {
    await trx('notice').insert({
      id: toBinary(one.id), programme_id: toBinary(one.programmeId), decision_id: toBinary(one.decisionId), cause: one.cause, payload: sealed({ changes: one.changes, by: one.by }).text, at: one.at,
    })
    return true
  }
  catch (error) {
    if (isDuplicate(error, 'once')) return false
    throw error
  }
}

/** Notices of a programme's decisions, newest first. */
export async function listNotices(db: Knex, programmeId: string, decisionId?: string): Promise<NoticeRow[]> {
  const rows = await db('notice as n').leftJoin('notice_ack as a', 'a.notice_id', 'n.id').leftJoin('person as p', 'p.id', 'a.person_id').where('n.programme_id', toBinary(programmeId))
    .modify((query) => { if (decisionId) void query.where('n.decision_id', toBinary(decisionId)) })
    .orderBy('n.at', 'desc').orderBy('n.id', 'desc')
    .select('n.id', 'n.decision_id', 'n.cause', 'n.payload', 'n.at', 'p.name as ack_by', 'a.at as ack_at', 'a.note as ack_note') as Raw[]
  return rows.map((row) => {
    const { changes, by } = JSON.parse(row.payload) as { changes: Change[], by: string | null }
    return { id: fromBinary(row.id), decisionId: fromBinary(row.decision_id), cause: row.cause, changes, by, at: row.at, ack: row.ack_at ? { by: row.ack_by ?? '', at: row.ack_at, note: row.ack_note ?? '' } : null }
  })
}

export async function findNotice(db: Knex, programmeId: string, id: string): Promise<{ id: string, decisionId: string } | null> {
  const row = await db('notice').where({ programme_id: toBinary(programmeId), id: toBinary(id) }).first('id', 'decision_id') as { id: Buffer, decision_id: Buffer } | undefined
  return row ? { id: fromBinary(row.id), decisionId: fromBinary(row.decision_id) } : null
}

/** @throws a duplicate on the key `once` when somebody acknowledged it first */
export async function insertNoticeAck(trx: Knex, one: { id: string, programmeId: string, noticeId: string, note: string, personId: string, at: Date }): Promise<void> {
  await trx('notice_ack').insert({ id: toBinary(one.id), programme_id: toBinary(one.programmeId), notice_id: toBinary(one.noticeId), note: one.note, person_id: toBinary(one.personId), at: one.at })
}
