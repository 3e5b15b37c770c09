import { AppError } from '../../shared/errors'
import type { Scope } from '../../shared/permissions'
import type { FitDto } from '../../shared/schemas/fit'
import type { Deps } from '../platform/deps'
import type { AnalysisOutcome, MeasurementKind } from '../../shared/measurements/types'
import type { FigureSpec } from '../../shared/schemas/figure'
import { readEvidence } from '../queries/evidence'
import { evidenceIdsOfFit, findFit, fitExclusions, fitVersions, type FitRow, type FitVersionRow } from '../queries/fits'
import { findSeries, tubePlaces, type SeriesRow } from '../queries/series'
import { sessionFlags } from './controlCharts'
import { fitDto } from './fitDto'
import { SERIES_NOT_FOUND } from './requestFit'

export interface ShowFitInput { programmeId: string, scope: Scope, seriesId: string, versionNo: number }

/** One version of a fit. In 'signed' scope an unsigned version is answered like one that does not exist. */
export async function showFit(deps: Pick<Deps, 'db' | 'kinds'>, { programmeId, scope, seriesId, versionNo }: ShowFitInput): Promise<FitDto> {
  const { series, kind, versions, fit } = await readFit(deps, { programmeId, scope, seriesId, versionNo })
  const ids = await evidenceIdsOfFit(deps.db, programmeId, fit.id)
  const dto = fitDto({
    fit, versions, kind,
    exclusions: await fitExclusions(deps.db, programmeId, fit.id),
    evidence: ids.length === 0 ? [] : await readEvidence(deps.db, programmeId, scope, { ids: ids.map(one => one.id) }),
    places: scope === 'signed' ? new Map() : await tubePlaces(deps.db, programmeId, seriesId),
  })
  // Flags of the session follow from other series as well: shown with the fit, no part of what is stored. Partners see what was signed, and no more.
  const session = scope === 'signed' ? [] : await sessionFlags(deps, { programmeId, uploadId: series.uploadId, instrument: series.conditions.instrument })
  return { ...dto, flags: [...dto.flags, ...session] }
}

/** One tube of a version at full size. */
export async function showTubeFigure(deps: Pick<Deps, 'db' | 'kinds'>, { tubeNo, ...of }: ShowFitInput & { tubeNo: number }): Promise<FigureSpec> {
  const { kind, fit } = await readFit(deps, of)
  const tube = (JSON.parse(fit.result) as AnalysisOutcome).tubes.find(one => one.tubeNo === tubeNo)
  if (!tube) throw new AppError('notFound', `There is no tube ${tubeNo} in this fit.`)
  return kind.tubeFigure(tube)
}

interface FitFound { series: SeriesRow, kind: MeasurementKind, versions: FitVersionRow[], fit: FitRow }

async function readFit({ db, kinds }: Pick<Deps, 'db' | 'kinds'>, { programmeId, scope, seriesId, versionNo }: ShowFitInput): Promise<FitFound> {
  const series = await findSeries(db, programmeId, seriesId, scope)
  if (!series) throw new AppError('notFound', SERIES_NOT_FOUND)
  const kind = kinds[series.kind]
  if (!kind) throw new Error(`No measurement kind is called ${series.kind}.`)
  const versions = await fitVersions(db, programmeId, seriesId, { signedOnly: scope === 'signed' })
  const fit = versions.some(version => version.versionNo === versionNo) ? await findFit(db, programmeId, seriesId, versionNo) : null
  if (!fit) throw new AppError('notFound', 'There is no such version of this series, or it is not open to you.')
  return { series, kind, versions, fit }
}
