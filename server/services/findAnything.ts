import { RECORD_KINDS } from '../../shared/evidence/records/index'
import type { Scope } from '../../shared/permissions'
import type { FindDto } from '../../shared/schemas/find'
import type { Deps } from '../platform/deps'
import { findAgents, findRecordsBy, findSeriesBy } from '../queries/find'
import { seesFiles } from './showSeries'

/** So many of each are listed; who needs more types more. */
const LISTED = 12

/** Agents, series and records of a programme whose code, name, title, file or source holds a text. A partner finds what is signed, and no file names. */
export async function findAnything(deps: Pick<Deps, 'db'>, { programmeId, scope, text }: { programmeId: string, scope: Scope, text: string }): Promise<FindDto> {
  const place = { programmeId, scope, text, limit: LISTED + 1 }
  const withFiles = await seesFiles(deps, programmeId, scope)
  const kinds = Object.entries(RECORD_KINDS).filter(([, kind]) => kind.title.toLowerCase().includes(text.toLowerCase())).map(([id]) => id)
  const [agents, series, records] = await Promise.all([findAgents(deps.db, place), findSeriesBy(deps.db, place, { withFiles }), findRecordsBy(deps.db, place, kinds)])
  return {
    agents: agents.slice(0, LISTED),
    series: series.slice(0, LISTED).map(one => ({ ...one, fileName: withFiles ? one.fileName : null })),
    records: records.slice(0, LISTED).map(({ id, agentCode, kind, citation }) => ({ id, agentCode, title: RECORD_KINDS[kind]?.title ?? kind, citation })),
    more: [agents, series, records].some(list => list.length > LISTED),
  }
}
