import { AppError } from '../../shared/errors'
import { formatFixed, NBSP } from '../../shared/format'
import { toShown } from '../../shared/measurements/shownCondition'
import type { ConditionSpec, FitOptionSpec } from '../../shared/measurements/types'
import type { Scope } from '../../shared/permissions'
import type { SeriesDto } from '../../shared/schemas/series'
import type { Deps } from '../platform/deps'
import { hex } from '../platform/hashes'
import { agentMark } from '../queries/agentMarks'
import { fitVersions } from '../queries/fits'
import { findProgramme } from '../queries/programmes'
import { findSeries, seriesEvents, type SeriesRow, seriesTubes } from '../queries/series'
import { versionDto } from './fitDto'
import { SERIES_NOT_FOUND } from './requestFit'

export interface ShowSeriesInput { programmeId: string, scope: Scope, seriesId: string }

/** A series with its conditions, tubes, file and versions. A partner sees the signed versions, and the file only where the programme opened its files. */
export async function showSeries(deps: Pick<Deps, 'db' | 'kinds'>, { programmeId, scope, seriesId }: ShowSeriesInput): Promise<SeriesDto> {
  const series = await findSeries(deps.db, programmeId, seriesId, scope)
  if (!series) throw new AppError('notFound', SERIES_NOT_FOUND)
  const kind = deps.kinds[series.kind]
  if (!kind) throw new Error(`No measurement kind is called ${series.kind}.`)
  const isPartner = scope === 'signed'
  const [mark, versions, tubes, events, showsFile] = await Promise.all([
    agentMark(deps.db, programmeId, series.complexId), fitVersions(deps.db, programmeId, seriesId, { signedOnly: isPartner }), seriesTubes(deps.db, programmeId, seriesId),
    seriesEvents(deps.db, programmeId, seriesId), seesFiles(deps, programmeId, scope),
  ])
  return {
    id: series.id, kind: series.kind, kindTitle: kind.title, title: series.title, words: kind.seriesWords ?? { title: 'Slope', note: 'band: 95 %' }, agentCode: series.agentCode, lot: series.lot, mechanism: mark?.mechanism ?? null, topology: mark?.topology ?? null,
    conditions: kind.conditions.flatMap(spec => conditionDto(spec, series)), models: kind.models.map(({ id, version, title }) => ({ id, version, title })), defaultModel: kind.defaultModel(series.conditions), options: (kind.options ?? []).map(optionDto),
    tubes: tubes.map(tube => ({ tubeNo: tube.tubeNo, label: tube.label, role: tube.role, conc_mM: tube.conc_mM, concSe_mM: tube.concSe_mM, points: tube.points.rows.length, place: showsFile ? tube.place : '' })),
    inputHash: hex(series.inputHash), file: showsFile ? fileDto(series) : null, recordedBy: series.createdByName, recordedAt: series.createdAt.toISOString(),
    events: isPartner ? [] : events.map(({ event, reason, personName, at }) => ({ event, reason, personName, at: at.toISOString() })),
    replaces: isPartner ? null : series.replaces, replacedBy: series.replacedBy, isWithdrawn: series.isWithdrawn, versions: versions.map(version => versionDto(version, versions, kind)),
  }
}

/** Whether this scope sees raw files: staff always, a partner where the lead allowed it. */
export async function seesFiles(deps: Pick<Deps, 'db'>, programmeId: string, scope: Scope): Promise<boolean> {
  return scope !== 'signed' || ((await findProgramme(deps.db, programmeId))?.partnerSeesRawFiles ?? false)
}

const optionDto = (spec: FitOptionSpec): SeriesDto['options'][number] => ({
  key: spec.key, label: spec.label, type: spec.type, choices: [...spec.choices ?? []], min: spec.min ?? null, max: spec.max ?? null, unit: spec.unit ?? null, standard: spec.standard, help: spec.help,
  models: spec.models ? [...spec.models] : null,
})

function conditionDto(spec: ConditionSpec, { conditions }: SeriesRow): SeriesDto['conditions'] {
  const value = conditions[spec.key]
  if (value === undefined || value === null) return []
  return [{ key: spec.key, label: spec.label, value, unit: spec.shownUnit ?? null, shown: shownCondition(spec, value) }]
}

/** A stored condition in the unit that the trade writes: 310.15 K as 37.0 °C. */
export function shownCondition(spec: ConditionSpec, value: number | string): string {
  if (typeof value === 'string') return spec.choices?.find(choice => choice.value === value)?.label ?? value
  const shown = toShown(spec, value)
  const digits = String(Number(shown.toPrecision(6))).split('.')[1]?.length ?? 0
  return `${formatFixed(shown, digits)}${spec.shownUnit ? `${NBSP}${spec.shownUnit}` : ''}`
}

const fileDto = (series: SeriesRow): SeriesDto['file'] => ({
  uploadId: series.uploadId, name: series.fileName, bytes: series.fileBytes, sha256: hex(series.sha256), uploadedBy: series.uploadedByName, uploadedAt: series.uploadedAt.toISOString(),
})
