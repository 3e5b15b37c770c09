import type { Knex } from 'knex'
import { toBinary } from '../platform/ids'

/** The profile version saved last in a programme; null before a lead saved one. */
export async function newestProfile(db: Knex, programmeId: string): Promise<{ name: string, versionNo: number, payload: unknown } | null> {
  const row = await db('profile_version as v').join('profile as p', 'p.id', 'v.profile_id').where('v.programme_id', toBinary(programmeId))
    .orderBy('v.created_at', 'desc').orderBy('v.id', 'desc').first('p.name', 'v.version_no', 'v.payload') as { name: string, version_no: number, payload: string } | undefined
  return row ? { name: row.name, versionNo: row.version_no, payload: JSON.parse(row.payload) as unknown } : null
}
