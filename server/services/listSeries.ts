import { AppError } from '../../shared/errors'
import type { Scope } from '../../shared/permissions'
import type { SeriesListDto, SeriesListItem, SeriesQuery } from '../../shared/schemas/series'
import type { Deps } from '../platform/deps'
import { isId } from '../platform/ids'
import { headlinesOf, listSeriesRows, type SeriesListRow, seriesChoices } from '../queries/seriesList'
import { seesFiles } from './showSeries'

export interface ListSeriesInput { programmeId: string, scope: Scope, query: SeriesQuery }

/** Series of a programme, newest first, a page at a time, each with the number that counts for it. */
export async function listSeries(deps: Pick<Deps, 'db' | 'kinds'>, { programmeId, scope, query }: ListSeriesInput): Promise<SeriesListDto> {
  const rows = await listSeriesRows(deps.db, programmeId, scope, { agentCode: query.agent, kind: query.kind, state: scope === 'signed' ? undefined : query.state, before: readCursor(query.before), limit: query.limit + 1 })
  const page = rows.slice(0, query.limit)
  const [headlines, choices, showsFile] = await Promise.all([
    headlinesOf(deps.db, programmeId, page.flatMap(row => row.standing && (row.standing.signed || scope !== 'signed') ? [row.standing.fitId] : [])),
    seriesChoices(deps.db, programmeId, scope), seesFiles(deps, programmeId, scope),
  ])
  const last = page.at(-1)
  return {
    series: page.map(row => itemDto(deps, row, { headline: row.standing ? headlines.get(row.standing.fitId) : undefined, showsFile, isPartner: scope === 'signed' })),
    next: rows.length > page.length && last ? `${last.createdAt.toISOString()}_${last.id}` : null,
    kinds: choices.kinds.map(kind => ({ kind, title: deps.kinds[kind]?.title ?? kind })), agents: choices.agents,
  }
}

interface Beside { headline: Awaited<ReturnType<typeof headlinesOf>> extends Map<string, infer H> ? H | undefined : never, showsFile: boolean, isPartner: boolean }

function itemDto({ kinds }: Pick<Deps, 'kinds'>, row: SeriesListRow, { headline, showsFile, isPartner }: Beside): SeriesListItem {
  return {
    id: row.id, kind: row.kind, kindTitle: kinds[row.kind]?.title ?? row.kind, title: row.title, agentCode: row.agentCode, lot: row.lot, fileName: showsFile ? row.fileName : null,
    recordedBy: row.createdByName, recordedAt: row.createdAt.toISOString(), tubes: row.nTubes,
    // A partner knows nothing of newer, unsigned versions.
    versionNo: isPartner ? row.standing?.versionNo ?? null : row.versionNo, state: isPartner ? 'signed' : row.state,
    headline: row.standing && headline
      ? { quantity: headline.draft.quantity, value: { ...headline.draft.value, evidenceId: headline.evidenceId }, signed: row.standing.signed, versionNo: row.standing.versionNo }
      : null,
  }
}

function readCursor(text: string | undefined): { at: Date, id: string } | undefined {
  if (text === undefined) return undefined
  const [time = '', id = ''] = text.split('_')
  const at = new Date(time)
  if (Number.isNaN(at.getTime()) || !isId(id)) throw new AppError('invalidInput', 'This page of the list does not exist.', { field: 'before', accepted: 'the `next` of the answer before' })
  return { at, id }
}
