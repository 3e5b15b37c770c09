import type { Knex } from 'knex'
import type { Mechanism, Topology } from '../../shared/science/placement/types'
import { toBinary } from '../platform/ids'

export interface AgentMark { code: string, mechanism: Mechanism, topology: Topology }

/** What the mark of an agent shows: how it gives contrast and whether its ligand is a ring, by their newest versions. */
export async function agentMark(db: Knex, programmeId: string, complexId: string): Promise<AgentMark | null> {
  const row = await db('complex as c').where('c.programme_id', toBinary(programmeId)).where('c.id', toBinary(complexId)).first('c.code',
    db.raw('(SELECT v.payload FROM complex_version v WHERE v.complex_id = c.id ORDER BY v.version_no DESC LIMIT 1) AS complex_payload'),
    db.raw('(SELECT v.payload FROM ligand_version v WHERE v.ligand_id = c.ligand_id ORDER BY v.version_no DESC LIMIT 1) AS ligand_payload')) as { code: string, complex_payload: string | null, ligand_payload: string | null } | undefined
  if (!row?.complex_payload || !row.ligand_payload) return null
  const { mechanism } = JSON.parse(row.complex_payload) as { mechanism: Mechanism }
  const { topology } = JSON.parse(row.ligand_payload) as { topology: Topology }
  return { code: row.code, mechanism, topology }
}
