import type { Knex } from 'knex'
import { sealed } from '../platform/hashes'
import { fromBinary, toBinary } from '../platform/ids'

/** Things whose identity stays while what is known of them is added in versions. */
export type Versioned = 'ligand' | 'complex' | 'batch'

export interface VersionRow { id: string, parentId: string, versionNo: number, payload: unknown, personId: string, personName: string, at: Date }
export interface NewVersion { id: string, programmeId: string, parentId: string, versionNo: number, payload: unknown, personId: string, at: Date }

/** @throws a duplicate on the key `version` when somebody else added this version first */
export async function insertVersion(trx: Knex, what: Versioned, one: NewVersion): Promise<void> {
  const { text, hash } = sealed(one.payload)
  await trx(`${what}_version`).insert({
    id: toBinary(one.id), programme_id: toBinary(one.programmeId), [`${what}_id`]: toBinary(one.parentId), version_no: one.versionNo, payload: text, payload_hash: hash,
    created_by: toBinary(one.personId), created_at: one.at,
  })
}

interface Raw { id: Buffer, parent_id: Buffer, version_no: number, payload: string, created_by: Buffer, name: string, created_at: Date }

/** All versions, newest first; of one parent, or of every parent of the programme. */
export async function readVersions(db: Knex, what: Versioned, programmeId: string, parentId?: string): Promise<VersionRow[]> {
  const rows = await db(`${what}_version as v`).join('person as p', 'p.id', 'v.created_by').where('v.programme_id', toBinary(programmeId))
    .modify((query) => { if (parentId) void query.where(`v.${what}_id`, toBinary(parentId)) })
    .orderBy('v.version_no', 'desc')
    .select('v.id', `v.${what}_id as parent_id`, 'v.version_no', 'v.payload', 'v.created_by', 'p.name', 'v.created_at') as Raw[]
  return rows.map(row => ({
    id: fromBinary(row.id), parentId: fromBinary(row.parent_id), versionNo: row.version_no, payload: JSON.parse(row.payload) as unknown,
    personId: fromBinary(row.created_by), personName: row.name, at: row.created_at,
  }))
}

/** Who added a version and when, read past the snapshot of the transaction: for the words of a conflict. */
export async function whoAddedVersion(trx: Knex, what: Versioned, programmeId: string, parentId: string, versionNo: number): Promise<{ personName: string, at: Date } | null> {
  const row = await trx(`${what}_version as v`).join('person as p', 'p.id', 'v.created_by')
    .where({ 'v.programme_id': toBinary(programmeId), [`v.${what}_id`]: toBinary(parentId), 'v.version_no': versionNo }).forShare().first('p.name', 'v.created_at') as { name: string, created_at: Date } | undefined
  return row ? { personName: row.name, at: row.created_at } : null
}
