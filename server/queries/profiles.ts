import type { Knex } from 'knex'
import type { ScreeningProfile } from '../../shared/science/placement/profile'
import { sealed } from '../platform/hashes'
import { fromBinary, toBinary } from '../platform/ids'

export interface ProfileVersionRow { id: string, profileId: string, name: string, versionNo: number, payload: ScreeningProfile, note: string, personName: string, at: Date }
interface Raw { id: Buffer, profile_id: Buffer, name: string, version_no: number, payload: string, note: string, person_name: string, created_at: Date }

const versions = (db: Knex, programmeId: string) => db('profile_version as v').join('profile as p', 'p.id', 'v.profile_id').join('person as w', 'w.id', 'v.created_by')
  .where('v.programme_id', toBinary(programmeId)).select('v.id', 'v.profile_id', 'p.name', 'v.version_no', 'v.payload', 'v.note', 'w.name as person_name', 'v.created_at')

const toRow = (row: Raw): ProfileVersionRow => ({
  id: fromBinary(row.id), profileId: fromBinary(row.profile_id), name: row.name, versionNo: row.version_no, payload: JSON.parse(row.payload) as ScreeningProfile, note: row.note,
  personName: row.person_name, at: row.created_at,
})

/** All versions of all profiles of a programme, newest first. */
export async function listProfileVersions(db: Knex, programmeId: string): Promise<ProfileVersionRow[]> {
  const rows = await versions(db, programmeId).orderBy('v.created_at', 'desc').orderBy('v.id', 'desc') as Raw[]
  return rows.map(toRow)
}

export async function findProfileVersion(db: Knex, programmeId: string, id: string): Promise<ProfileVersionRow | null> {
  const row = await versions(db, programmeId).where('v.id', toBinary(id)).first() as Raw | undefined
  return row ? toRow(row) : null
}

export async function findProfileByName(db: Knex, programmeId: string, name: string): Promise<string | null> {
  const row = await db('profile').where({ programme_id: toBinary(programmeId), name }).first('id') as { id: Buffer } | undefined
  return row ? fromBinary(row.id) : null
}

/** The newest version of a profile, read past the snapshot of the transaction. */
export async function newestVersionOf(trx: Knex, programmeId: string, profileId: string): Promise<ProfileVersionRow | null> {
  const row = await versions(trx, programmeId).where('v.profile_id', toBinary(profileId)).orderBy('v.version_no', 'desc').forShare().first() as Raw | undefined
  return row ? toRow(row) : null
}

export async function insertProfile(trx: Knex, one: { id: string, programmeId: string, name: string, personId: string, at: Date }): Promise<void> {
  await trx('profile').insert({ id: toBinary(one.id), programme_id: toBinary(one.programmeId), name: one.name, created_by: toBinary(one.personId), created_at: one.at })
}

export interface NewProfileVersion { id: string, programmeId: string, profileId: string, versionNo: number, payload: ScreeningProfile, note: string, personId: string, at: Date }

/** @throws a duplicate on the key `version` when somebody else saved this version first */
export async function insertProfileVersion(trx: Knex, one: NewProfileVersion): Promise<void> {
  const { text, hash } = sealed(one.payload)
  await trx('profile_version').insert({
    id: toBinary(one.id), programme_id: toBinary(one.programmeId), profile_id: toBinary(one.profileId), version_no: one.versionNo, payload: text, payload_hash: hash, note: one.note,
    created_by: toBinary(one.personId), created_at: one.at,
  })
}
