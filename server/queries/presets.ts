import type { Knex } from 'knex'
import type { Conditions } from '../../shared/measurements/types'
import { isDuplicate } from '../platform/database'
import { fromBinary, toBinary } from '../platform/ids'

export interface PresetRow { id: string, name: string, kind: string, conditions: Conditions, createdByName: string, updatedAt: Date }
interface Raw { id: Buffer, name: string, kind: string, conditions: string, person_name: string, updated_at: Date }

export async function listPresets(db: Knex, programmeId: string, kind: string): Promise<PresetRow[]> {
  const rows = await db('preset').join('person', 'person.id', 'preset.created_by').where({ 'preset.programme_id': toBinary(programmeId), 'preset.kind': kind }).orderBy('preset.name')
    .select('preset.id', 'preset.name', 'preset.kind', 'preset.conditions', 'preset.updated_at', 'person.name as person_name') as Raw[]
  return rows.map(row => ({ id: fromBinary(row.id), name: row.name, kind: row.kind, conditions: JSON.parse(row.conditions) as Conditions, createdByName: row.person_name, updatedAt: row.updated_at }))
}

/** Adds a preset, or puts these conditions in the place of those under the same name. */
export async function writePreset(trx: Knex, row: { id: string, programmeId: string, name: string, kind: string, conditions: string, personId: string, at: Date }): Promise<void> {
  const changed = { conditions: row.conditions, created_by: toBinary(row.personId), updated_at: row.at }
  try {
    await trx('preset').insert({ ...changed, id: toBinary(row.id), programme_id: toBinary(row.programmeId), name: row.name, kind: row.kind })
  }
  catch (error) {
    if (!isDuplicate(error, 'name')) throw error
    await trx('preset').where({ programme_id: toBinary(row.programmeId), kind: row.kind, name: row.name }).update(changed)
  }
}

/** @returns false when there is no such preset in the programme */
export async function deletePreset(trx: Knex, programmeId: string, id: string): Promise<boolean> {
  return await trx('preset').where({ id: toBinary(id), programme_id: toBinary(programmeId) }).delete() === 1
}

export async function listInstruments(db: Knex, programmeId: string): Promise<{ name: string, b0_T: number }[]> {
  const rows = await db('instrument').where({ programme_id: toBinary(programmeId) }).orderBy('name').select('name', 'b0_T') as { name: string, b0_T: number }[]
  // The text protocol may be off in the last digit; a field is known to far fewer.
  return rows.map(row => ({ name: row.name, b0_T: Number(row.b0_T.toPrecision(9)) }))
}

/** Adds an instrument unless one of that name is there. */
export async function addInstrument(trx: Knex, row: { id: string, programmeId: string, name: string, b0_T: number, at: Date }): Promise<void> {
  const known = await trx('instrument').where({ programme_id: toBinary(row.programmeId), name: row.name }).first('id') as { id: Buffer } | undefined
  if (known) return
  try {
    await trx('instrument').insert({ id: toBinary(row.id), programme_id: toBinary(row.programmeId), name: row.name, b0_T: row.b0_T, created_at: row.at })
  }
  catch (error) {
    if (!isDuplicate(error, 'name')) throw error
  }
}
