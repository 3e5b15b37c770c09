import type { Knex } from 'knex'
import type { TubeSheet } from '../../shared/schemas/tubeSheet'
import { fromBinary, toBinary } from '../platform/ids'

export interface TubeSheetRow { id: string, code: string, kind: string, title: string, body: TubeSheet, createdByName: string, createdAt: Date }
interface Raw { id: Buffer, code: string, kind: string, title: string, body: string, person_name: string, created_at: Date }

const toSheet = (row: Raw): TubeSheetRow => ({
  id: fromBinary(row.id), code: row.code, kind: row.kind, title: row.title, body: JSON.parse(row.body) as TubeSheet, createdByName: row.person_name, createdAt: row.created_at,
})

const from = (db: Knex, programmeId: string) => db('tube_sheet').join('person', 'person.id', 'tube_sheet.created_by').where({ 'tube_sheet.programme_id': toBinary(programmeId) })
  .select('tube_sheet.*', 'person.name as person_name')

export async function findTubeSheet(db: Knex, programmeId: string, code: string): Promise<TubeSheetRow | null> {
  const row = await from(db, programmeId).where({ code }).first() as Raw | undefined
  return row ? toSheet(row) : null
}

export async function listTubeSheets(db: Knex, programmeId: string): Promise<TubeSheetRow[]> {
  return (await from(db, programmeId).orderBy('tube_sheet.created_at', 'desc').orderBy('tube_sheet.id', 'desc').limit(200) as Raw[]).map(toSheet)
}

/** @throws a duplicate on the key `code` when the code is taken */
export async function insertTubeSheet(trx: Knex, row: { id: string, programmeId: string, sheet: TubeSheet, body: string, personId: string, at: Date }): Promise<void> {
  await trx('tube_sheet').insert({
    id: toBinary(row.id), programme_id: toBinary(row.programmeId), code: row.sheet.code, kind: row.sheet.kind, title: row.sheet.title, body: row.body, created_by: toBinary(row.personId), created_at: row.at,
  })
}
