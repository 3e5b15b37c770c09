import type { Knex } from 'knex'
import type { CheckState, CheckSubjectKind } from '../../shared/checks/transitions'
import { fromBinary, toBinary } from '../platform/ids'
import { CHAINS } from './checks'
import { WITHDRAWN } from './series'

export interface UnsentRow { kind: CheckSubjectKind, id: string, state: CheckState, seq: number, since: Date | null, madeAt: Date }
interface Raw { id: Buffer, state: CheckState | null, seq: number | null, since: Date | null, created_at: Date }

const OPEN: readonly CheckState[] = ['returned', 'recalled', 'withdrawn']

/**
 * The newest version of every chain that nobody has to check: drafts, returned, recalled, and those whose signature was withdrawn. Chains of which another
 * version waits, series that were withdrawn or corrected, and batches that say nothing to sign are left out. Newest first.
 */
export async function unsentVersions(db: Knex, programmeId: string, limit: number): Promise<UnsentRow[]> {
  const kinds = Object.keys(CHAINS) as CheckSubjectKind[]
  const found = await Promise.all(kinds.map(kind => unsentOf(db, programmeId, kind, limit)))
  return found.flat().sort((one, other) => other.madeAt.getTime() - one.madeAt.getTime() || (other.id < one.id ? -1 : 1)).slice(0, limit)
}

async function unsentOf(db: Knex, programmeId: string, kind: CheckSubjectKind, limit: number): Promise<UnsentRow[]> {
  const { table, chain } = CHAINS[kind]
  const rows = await db(`${table} as t`).leftJoin('check_current as c', 'c.subject_id', 't.id').where('t.programme_id', toBinary(programmeId))
    .whereRaw(`t.version_no = (SELECT MAX(n.version_no) FROM ${table} n WHERE n.${chain} = t.${chain})`)
    .where(one => one.whereNull('c.state').orWhereIn('c.state', OPEN))
    .whereRaw(`NOT EXISTS (SELECT 1 FROM ${table} o JOIN check_current w ON w.subject_id = o.id WHERE o.${chain} = t.${chain} AND w.state IN ('waiting', 'firstSigned'))`)
    .modify((query) => {
      if (kind === 'fit') void query.join('series as s', 's.id', 't.series_id').whereRaw(`NOT EXISTS (${WITHDRAWN})`).whereRaw('NOT EXISTS (SELECT 1 FROM series n WHERE n.replaces = s.id)')
      if (kind === 'batchVersion') void query.whereRaw('EXISTS (SELECT 1 FROM evidence e WHERE e.batch_version_id = t.id)')
    })
    .orderBy('t.created_at', 'desc').orderBy('t.id', 'desc').limit(limit).select('t.id', 't.created_at', 'c.state', 'c.seq', 'c.since') as Raw[]
  return rows.map(row => ({ kind, id: fromBinary(row.id), state: row.state ?? 'draft', seq: row.seq ?? 0, since: row.since, madeAt: row.created_at }))
}
