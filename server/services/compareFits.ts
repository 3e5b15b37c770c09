import { AppError } from '../../shared/errors'
import type { AnalysisOutcome, MeasurementKind, TubeResult } from '../../shared/measurements/types'
import { optionWords } from '../../shared/measurements/fitOptions'
import type { FigureSpec } from '../../shared/schemas/figure'
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
  const gap = bothAicc ? b.totals!.aicc! - a.totals!.aicc! : null
  return {
    a: { ...sideDto(a, all, kind), weight: gap === null ? null : 1 / (1 + Math.exp(-gap / 2)) }, b: { ...sideDto(b, all, kind), weight: gap === null ? null : 1 / (1 + Math.exp(gap / 2)) }, samePoints, aiccDifference: gap, fTest, shiftInSe: shift(a.outcome, b.outcome),
    tubes: pairTubes(kind, a, b), note: noteOf({ a, b, samePoints, fTest }),
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

function sideDto({ fit, outcome, totals }: Side, all: readonly FitVersionRow[], kind: MeasurementKind): Omit<CompareDto['a'], 'weight'> {
  return {
    ...versionDto(fit, all, kind), headline: outcome.ok ? outcome.series.headline : null, parameters: outcome.ok ? outcome.series.parameters : [], statistics: outcome.ok ? outcome.series.statistics : [],
    options: optionWords(kind.options ?? [], JSON.parse(fit.options) as Readonly<Record<string, number | string | boolean>>), rss: totals?.rss ?? null, dof: totals?.dof ?? null, aicc: totals?.aicc ?? null,
    flags: outcome.tubes.reduce((sum, tube) => sum + tube.flags.length, outcome.ok ? outcome.flags.length : 0),
  }
}

function pairTubes(kind: MeasurementKind, a: Side, b: Side): CompareDto['tubes'] {
  const names = [`v${a.fit.versionNo}`, `v${b.fit.versionNo}`] as const
  return a.outcome.tubes.map((tube) => {
    const other = b.outcome.tubes.find(one => one.tubeNo === tube.tubeNo)
    return {
      tubeNo: tube.tubeNo, label: tube.label, a: tube.headline, b: other?.headline ?? null, aOut: tube.excluded !== null, bOut: (other?.excluded ?? null) !== null,
      figure: other && (tube.curve.length > 0 || other.curve.length > 0) ? overlay(kind.tubeFigure(tube), other, names) : null,
    }
  })
}

/** The figure of one version with the other's curve laid over it, solid and dashed; the residuals drawn are the first's, those of the second stand in the table. */
function overlay(figure: FigureSpec, other: TubeResult, [first, second]: readonly [string, string]): FigureSpec {
  return {
    ...figure, id: `${figure.id}-compared`, text: `${figure.text} Two versions over the same points.`,
    layers: [
      ...figure.layers.map(layer => layer.type === 'line' ? { ...layer, name: first } : layer),
      { type: 'line', name: second, token: 's2', dash: 'dashed', points: other.curve },
    ],
    ...(figure.strip ? { strip: { ...figure.strip, label: `Residual of ${first}, studentised` } } : {}),
    ...(figure.table ? { table: withColumn(figure.table, other, second) } : {}),
  }
}

/** Rows of the table are the points of the tube in their order, and both versions are of one series. */
function withColumn(table: NonNullable<FigureSpec['table']>, { points }: TubeResult, version: string): FigureSpec['table'] {
  return { columns: [...table.columns, { key: 'other', label: `Residual of ${version}, studentised`, unit: null, numeric: true }], rows: table.rows.map((row, i) => ({ ...row, other: points[i]?.x === row.x ? points[i]?.studentised ?? null : null })) }
}

function noteOf({ a, b, samePoints, fTest }: { a: Side, b: Side, samePoints: boolean, fTest: CompareDto['fTest'] }): string {
  if (!a.outcome.ok || !b.outcome.ok) return 'One of the versions was refused, so there is nothing to weigh.'
  if (!a.totals || !b.totals) return 'These tubes were not fitted from points, so AICc and F say nothing about them.'
  if (!samePoints) return 'The versions rest on different points; AICc and F cannot judge between them.'
  if (fTest) return `The simpler model is a special case of the other; p is the chance of so large a gain if the simpler one holds.`
  return a.fit.modelId === b.fit.modelId ? 'Same model, same points.' : 'Neither model is a special case of the other; AICc compares them, F cannot.'
}
