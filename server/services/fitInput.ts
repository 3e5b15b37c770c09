import type { AnalysisInput, Conditions, Exclusion, MeasurementKind, SeriesTube } from '../../shared/measurements/types'
import type { Deps } from '../platform/deps'
import { hex, sealed } from '../platform/hashes'
import { findSeries, sealedTube, type SeriesRow, seriesTubes, type StoredTube } from '../queries/series'

export interface HashedInput { kind: string, kindVersion: number, conditions: Conditions, tubes: readonly SeriesTube[] }

/** One hash over everything measured that enters a fit: kind, conditions, and of every tube its name, role, concentration and points. */
export function inputHash({ kind, kindVersion, conditions, tubes }: HashedInput): Buffer {
  const read = tubes.map(tube => ({ tubeNo: tube.tubeNo, label: tube.label, role: tube.role, sealed: hex(sealedTube(tube).hash) }))
  return sealed({ kind, kindVersion, conditions, tubes: read }).hash
}

/** What is left out, in one order whatever order it was asked for in. */
export function orderedExclusions(exclusions: readonly Exclusion[]): Exclusion[] {
  return exclusions.map(({ tubeNo, pointIndex, reason }) => ({ tubeNo, pointIndex, reason }))
    .sort((a, b) => a.tubeNo - b.tubeNo || (a.pointIndex ?? -1) - (b.pointIndex ?? -1))
}

export interface LoadedSeries { series: SeriesRow, tubes: StoredTube[], kind: MeasurementKind }

/** A series with its tubes, checked against the hash it was stored with. @throws Error where they do not agree, or the series or its kind is gone */
export async function loadSeries(deps: Pick<Deps, 'db' | 'kinds'>, programmeId: string, seriesId: string): Promise<LoadedSeries> {
  const series = await findSeries(deps.db, programmeId, seriesId, 'programme')
  if (!series) throw new Error(`There is no series ${seriesId}.`)
  const kind = deps.kinds[series.kind]
  if (!kind) throw new Error(`No measurement kind is called ${series.kind}.`)
  const tubes = await seriesTubes(deps.db, programmeId, seriesId)
  if (!inputHash({ ...series, tubes }).equals(series.inputHash)) throw new Error(`What is stored of series ${seriesId} does not match its hash.`)
  return { series, tubes, kind }
}

export interface FitChoices { modelId: string, options: AnalysisInput['options'], exclusions: readonly Exclusion[] }

/** The one input of an analysis, the same for a first fit and for every repeat of it. The seed follows from what was measured. */
export function analysisInput({ series, tubes }: LoadedSeries, { modelId, options, exclusions }: FitChoices): AnalysisInput {
  return {
    kind: series.kind, conditions: series.conditions, modelId, options, exclusions: orderedExclusions(exclusions), seed: seedOf(series),
    tubes: tubes.map(({ tubeNo, label, role, conc_mM, concSe_mM, points }) => ({ tubeNo, label, role, conc_mM, concSe_mM, points })),
  }
}

export const seedOf = (series: Pick<SeriesRow, 'inputHash'>): string => hex(series.inputHash)
