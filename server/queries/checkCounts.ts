import type { Knex } from 'knex'
import { toBinary } from '../platform/ids'

/** How many subjects of a programme wait for a check or for a second signature. */
export async function countChecks(db: Knex, programmeId: string): Promise<number> {
  const row = await db('check_current').where({ programme_id: toBinary(programmeId) }).whereIn('state', ['waiting', 'firstSigned']).count({ n: '*' }).first() as { n: number }
  return Number(row.n)
}
