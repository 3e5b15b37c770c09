import type { EvidenceItemDto } from '../../shared/evidence/item'
import type { NamedQuantity } from '../../shared/evidence/quantity'
import type { AnalysisOutcome, MeasurementKind, TubeResult } from '../../shared/measurements/types'
import type { FitDto, FitVersionDto, TubeDto } from '../../shared/schemas/fit'
import { hex } from '../platform/hashes'
import type { FitRow, fitExclusions, FitVersionRow } from '../queries/fits'
import type { Engine } from './engine'
import { smallFigure } from './fitFigures'

export function versionDto(row: FitVersionRow, versions: readonly FitVersionRow[], kind: MeasurementKind): FitVersionDto {
  return {
    id: row.id, versionNo: row.versionNo, parentVersion: versions.find(one => one.id === row.parentId)?.versionNo ?? null, modelId: row.modelId,
    modelTitle: kind.models.find(model => model.id === row.modelId)?.title ?? row.modelId, outcome: row.outcome, leftOut: row.nExclusions, requestedBy: row.requestedByName,
    createdAt: row.createdAt.toISOString(), check: { ...row.check, since: row.check.since?.toISOString() ?? null },
  }
}

export interface FitParts {
  fit: FitRow
  versions: readonly FitVersionRow[]
  kind: MeasurementKind
  exclusions: Awaited<ReturnType<typeof fitExclusions>>
  evidence: readonly EvidenceItemDto[]
  places: ReadonlyMap<number, string>
}

/** A stored version as screens read it: the result's numbers untouched, each with the evidence that answers "where from?". */
export function fitDto({ fit, versions, kind, exclusions, evidence, places }: FitParts): FitDto {
  const outcome = JSON.parse(fit.result) as AnalysisOutcome
  const traced = (quantity: NamedQuantity): NamedQuantity => ({ ...quantity, evidenceId: evidence.find(item => item.quantity === quantity.name)?.id ?? null })
  return {
    ...versionDto(fit, versions, kind),
    seriesId: fit.seriesId, modelVersion: fit.modelVersion, options: JSON.parse(fit.options) as FitDto['options'], seed: fit.seed, inputHash: hex(fit.inputHash), resultHash: hex(fit.resultHash),
    engine: JSON.parse(fit.engine) as Engine,
    exclusions: exclusions.map(({ tubeNo, pointIndex, reason, personName, at }) => ({ tubeNo, pointIndex, reason, personName, at: at.toISOString() })),
    refusal: outcome.ok ? null : { reason: outcome.reason, message: outcome.message, accepted: outcome.accepted },
    series: outcome.ok ? { ...outcome.series, headline: traced(outcome.series.headline), parameters: outcome.series.parameters.map(traced) } : null,
    seriesFigure: kind.seriesFigure(outcome),
    tubes: outcome.tubes.map(tube => tubeDto(tube, kind, places)),
    flags: outcome.ok ? outcome.flags : [],
    passed: outcome.ok ? outcome.passed : [],
    method: outcome.ok ? outcome.method : null,
    evidence: [...evidence],
  }
}

function tubeDto(tube: TubeResult, kind: MeasurementKind, places: ReadonlyMap<number, string>): TubeDto {
  const figure = kind.tubeFigure(tube)
  return { ...tube, place: places.get(tube.tubeNo) ?? '', small: smallFigure(tube, figure, kind.labelsName === 'course') }
}
