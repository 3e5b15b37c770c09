import { AppError } from '../../shared/errors'
import type { AnalysisOutcome, MeasurementKind, TubeResult } from '../../shared/measurements/types'
import type { CompareDto } from '../../shared/schemas/fit'
import { fUpperP } from '../../shared/science/statistics'
import type { Deps } from '../platform/deps'
import { findFit, type FitRow, type FitVersionRow, fitVersions } from '../queries/fits'
import { findSeries } from '../queries/series'
import { versionDto } from './fitDto'
import { SERIES_NOT_FOUND } from './requestFit'

export interface CompareInput { programmeId: string, seriesId: string, versions: readonly [number, number] }

interface Side { fit: FitRow, outcome: AnalysisOutcome, totals: Totals | null }
/** Sums over the tubes that count: each tube is a fit of its own with its own parameters. */
interface Totals { rss: number, dof: number, aicc: number | null }

/** Two versions of one series side by side: numbers, flags, AICc, and an F-test where one model is a special case of the other. */
export async function compareFits(deps: Pick<Deps, 'db' | 'kinds'>, { programmeId, seriesId, versions }: CompareInput): Promise<CompareDto> {
  const series = await findSeries(deps.db, programmeId, seriesId, 'programme')
  const kind = series ? deps.kinds[series.kind] : undefined
  if (!series || !kind) throw new AppError('notFound', SERIES_NOT_FOUND)
  const all = await fitVersions(deps.db, programmeId, seriesId)
  const [a, b] = await Promise.all([side(deps, programmeId, seriesId, versions[0]), side(deps, programmeId, seriesId, versions[1])])
  const samePoints = a.fit.exclusionsHash.equals(b.fit.exclusionsHash) && a.totals !== null && b.totals !== null
  const bothAicc = samePoints && a.totals?.aicc != null && b.totals?.aicc != null
  const fTest = samePoints ? nestedTest(kind, a, b) : null
  return {
    a: sideDto(a, all, kind), b: sideDto(b, all, kind), samePoints, aiccDifference: bothAicc ? b.totals!.aicc! - a.totals!.aicc! : null, fTest, shiftInSe: shift(a.outcome, b.outcome),
    tubes: pairTubes(a.outcome.tubes, b.outcome.tubes), note: noteOf({ a, b, samePoints, fTest }),
  }
}

async function side(deps: Pick<Deps, 'db'>, programmeId: string, seriesId: string, versionNo: number): Promise<Side> {
  const fit = await findFit(deps.db, programmeId, seriesId, versionNo)
  if (!fit) throw new AppError('notFound', `This series has no version ${versionNo}.`)
  const outcome = JSON.parse(fit.result) as AnalysisOutcome
  return { fit, outcome, totals: outcome.ok ? totalsOf(outcome.tubes) : null }
}

function totalsOf(tubes: readonly TubeResult[]): Totals | null {
  const counted = tubes.flatMap(tube => tube.excluded === null && tube.statistics ? [tube.statistics] : [])
  if (counted.length === 0) return null
  const aiccs = counted.map(one => one.aicc)
  return {
    rss: counted.reduce((sum, one) => sum + one.rss, 0), dof: counted.reduce((sum, one) => sum + one.dof, 0),
    aicc: aiccs.some(aicc => aicc === null) ? null : aiccs.reduce<number>((sum, aicc) => sum + aicc!, 0),
  }
}

/** F = ((RSS_s − RSS_g)/(ν_s − ν_g)) / (RSS_g/ν_g) for a model s that is a special case of g; null where neither contains the other. */
function nestedTest(kind: MeasurementKind, a: Side, b: Side): CompareDto['fTest'] {
  const contains = (general: Side, special: Side) => kind.models.find(model => model.id === special.fit.modelId)?.within?.includes(general.fit.modelId) ?? false
  const simpler = contains(b, a) ? 'a' : contains(a, b) ? 'b' : null
  if (!simpler || !a.totals || !b.totals) return null
  const [special, general] = simpler === 'a' ? [a.totals, b.totals] : [b.totals, a.totals]
  const df1 = special.dof - general.dof
  if (!(df1 > 0) || !(general.dof > 0) || !(general.rss > 0)) return null
  const f = Math.max(0, (special.rss - general.rss) / df1 / (general.rss / general.dof))
  return { f, df1, df2: general.dof, p: fUpperP(f, df1, general.dof), simpler }
}

function shift(a: AnalysisOutcome, b: AnalysisOutcome): number | null {
  if (!a.ok || !b.ok || !a.series.headline.se) return null
  return (b.series.headline.value - a.series.headline.value) / a.series.headline.se
}

function sideDto({ fit, outcome, totals }: Side, all: readonly FitVersionRow[], kind: MeasurementKind): CompareDto['a'] {
  return {
    ...versionDto(fit, all, kind), headline: outcome.ok ? outcome.series.headline : null, parameters: outcome.ok ? outcome.series.parameters : [], statistics: outcome.ok ? outcome.series.statistics : [],
    rss: totals?.rss ?? null, dof: totals?.dof ?? null, aicc: totals?.aicc ?? null,
    flags: outcome.tubes.reduce((sum, tube) => sum + tube.flags.length, outcome.ok ? outcome.flags.length : 0),
  }
}

function pairTubes(a: readonly TubeResult[], b: readonly TubeResult[]): CompareDto['tubes'] {
  return a.map((tube) => {
    const other = b.find(one => one.tubeNo === tube.tubeNo)
    return { tubeNo: tube.tubeNo, label: tube.label, a: tube.headline, b: other?.headline ?? null, aOut: tube.excluded !== null, bOut: (other?.excluded ?? null) !== null }
  })
}

function noteOf({ a, b, samePoints, fTest }: { a: Side, b: Side, samePoints: boolean, fTest: CompareDto['fTest'] }): string {
  if (!a.outcome.ok || !b.outcome.ok) return 'One of the versions was refused, so there is nothing to weigh.'
  if (!a.totals || !b.totals) return 'These tubes were not fitted from points, so AICc and F say nothing about them.'
  if (!samePoints) return 'The versions rest on different points; AICc and F cannot judge between them.'
  if (fTest) return `The simpler model is a special case of the other; p is the chance of so large a gain if the simpler one holds.`
  return a.fit.modelId === b.fit.modelId ? 'Same model, same points.' : 'Neither model is a special case of the other; AICc compares them, F cannot.'
}
