import type { Knex } from 'knex'
import type { Scope } from '../../shared/permissions'
import { fromBinary, toBinary } from '../platform/ids'
import { signedFits } from './series'

export interface FindPlace { programmeId: string, scope: Scope, text: string, limit: number }

/** Letters without regard to case or accents; what people type is no pattern. */
const contains = (column: string): string => `${column} COLLATE utf8mb4_general_ci LIKE ?`
const pattern = (text: string): string => `%${text.replace(/[\\%_]/g, character => `\\${character}`)}%`

/** Agents by code, ligand, or the ligand's name; with a 'signed' scope those of which something is signed. */
export async function findAgents(db: Knex, { programmeId, scope, text, limit }: FindPlace): Promise<{ code: string, ligand: string }[]> {
  const name = `(SELECT JSON_VALUE(v.payload, '$.name') FROM ligand_version v WHERE v.ligand_id = l.id ORDER BY v.version_no DESC LIMIT 1)`
  return await db('complex as c').join('ligand as l', 'l.id', 'c.ligand_id').where('c.programme_id', toBinary(programmeId))
    .where(one => one.whereRaw(contains('c.code'), [pattern(text)]).orWhereRaw(contains('l.code'), [pattern(text)]).orWhereRaw(contains(name), [pattern(text)]))
    .modify((query) => {
      if (scope === 'signed') void query.whereExists(db('evidence as e').join('check_current as k', 'k.subject_id', 'e.origin_id').whereRaw('e.complex_id = c.id').where('k.state', 'signed').select(db.raw('1')))
    })
    .orderBy('c.code').limit(limit).select('c.code', 'l.code as ligand') as { code: string, ligand: string }[]
}

/** Series that stand, by title, lot, agent, and file name where files are open to whoever asks. */
export async function findSeriesBy(db: Knex, { programmeId, scope, text, limit }: FindPlace, { withFiles }: { withFiles: boolean }): Promise<{ id: string, agentCode: string, lot: string, title: string, fileName: string }[]> {
  const rows = await db('series as s').join('complex as c', 'c.id', 's.complex_id').join('batch as b', 'b.id', 's.batch_id').join('upload as u', 'u.id', 's.upload_id').where('s.programme_id', toBinary(programmeId))
    .whereNotExists(db('series as n').whereRaw('n.replaces = s.id').select(db.raw('1')))
    .where((one) => {
      for (const column of ['s.title', 'b.lot', 'c.code', ...(withFiles ? ['u.file_name'] : [])]) void one.orWhereRaw(contains(column), [pattern(text)])
    })
    .modify((query) => { if (scope === 'signed') void query.whereExists(signedFits(db)) })
    .orderBy('s.created_at', 'desc').orderBy('s.id', 'desc').limit(limit).select('s.id', 'c.code', 'b.lot', 's.title', 'u.file_name') as { id: Buffer, code: string, lot: string, title: string, file_name: string }[]
  return rows.map(row => ({ id: fromBinary(row.id), agentCode: row.code, lot: row.lot, title: row.title, fileName: row.file_name }))
}

/** Newest visible versions of records, by agent, citation or one of these kinds. */
export async function findRecordsBy(db: Knex, { programmeId, scope, text, limit }: FindPlace, kinds: readonly string[]): Promise<{ id: string, agentCode: string, kind: string, citation: string }[]> {
  const visible = scope === 'signed' ? 'JOIN check_current nk ON nk.subject_id = n.id AND nk.state = \'signed\'' : ''
  const rows = await db('record as r').join('complex as c', 'c.id', 'r.complex_id').join('source as s', 's.id', 'r.source_id').where('r.programme_id', toBinary(programmeId))
    .whereRaw(`r.version_no = (SELECT MAX(n.version_no) FROM record n ${visible} WHERE n.root_id = r.root_id)`)
    .where(one => one.whereRaw(contains('c.code'), [pattern(text)]).orWhereRaw(contains('s.citation'), [pattern(text)]).orWhereIn('r.kind', kinds))
    .orderBy('r.created_at', 'desc').orderBy('r.id', 'desc').limit(limit).select('r.id', 'c.code', 'r.kind', 's.citation') as { id: Buffer, code: string, kind: string, citation: string }[]
  return rows.map(row => ({ id: fromBinary(row.id), agentCode: row.code, kind: row.kind, citation: row.citation }))
}
