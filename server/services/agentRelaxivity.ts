import { AppError } from '../../shared/errors'
import { describeConditions } from '../../shared/measurements/relaxation/conditions'
import type { AnalysisOutcome, Conditions } from '../../shared/measurements/types'
import type { Scope } from '../../shared/permissions'
import { testAgreement, type SlopeWithErrors } from '../../shared/science/relaxometry/agreement'
import { testEqualSlopes, type BatchLine } from '../../shared/science/relaxometry/ancova'
import { poolReplicates } from '../../shared/science/relaxometry/pool'
import { bootstrapRatio, type PairedTube } from '../../shared/science/relaxometry/ratioBootstrap'
import { normalQuantile } from '../../shared/science/statistics'
import type { AgentRelaxivityDto, RelaxivityGroup, RelaxivityRatio } from '../../shared/schemas/relaxivity'
import type { Deps } from '../platform/deps'
import { comparableFits, type ComparableFit } from '../queries/comparableSeries'
import { findComplex } from '../queries/complexes'

type Fitted = ComparableFit & { outcome: Extract<AnalysisOutcome, { ok: true }> }

const SAME = ['b0_T', 'medium', 'echoSpacing_s'] as const
const SAME_TEMPERATURE_K = 0.5
const SAME_PH = 0.2

/** Relaxivities of an agent, laid together where they were measured alike: do batches and days agree, what do they give together, and r2/r1. Partners see signed ones. */
export async function agentRelaxivity(deps: Pick<Deps, 'db' | 'kinds'>, { programmeId, scope, code }: { programmeId: string, scope: Scope, code: string }): Promise<AgentRelaxivityDto> {
  const complex = await findComplex(deps.db, programmeId, { code })
  if (!complex) throw new AppError('notFound', 'There is no such agent, or it is not open to you.')
  const fits = (await comparableFits(deps.db, programmeId, { complexId: complex.id })).flatMap((one): Fitted[] => {
    if (!one.outcome.ok || !/^r[12]_per_mM_s$/.test(one.outcome.series.headline.name)) return []
    return scope === 'signed' && one.state !== 'signed' ? [] : [{ ...one, outcome: one.outcome }]
  })
  return { groups: groupsOf(fits).map(group => groupDto(deps, group)), ratios: ratiosOf(fits) }
}

function groupsOf(fits: readonly Fitted[]): Fitted[][] {
  const groups: Fitted[][] = []
  for (const fit of fits) {
    const known = groups.find(([first]) => first !== undefined && nameOf(first) === nameOf(fit) && isAlike(first.conditions, fit.conditions))
    if (known) known.push(fit)
    else groups.push([fit])
  }
  return groups.sort((a, b) => nameOf(a[0]!).localeCompare(nameOf(b[0]!)) || b.length - a.length)
}

const nameOf = (fit: Fitted): string => fit.outcome.series.headline.name

function isAlike(one: Conditions, other: Conditions, keys: readonly string[] = SAME): boolean {
  return keys.every(key => (one[key] ?? null) === (other[key] ?? null)) && !(Math.abs(Number(one.temperature_K) - Number(other.temperature_K)) > SAME_TEMPERATURE_K)
    // A pH that one of them does not state tells nothing against the other.
    && !(typeof one.pH === 'number' && typeof other.pH === 'number' && Math.abs(one.pH - other.pH) > SAME_PH)
}

/** Series of one batch whose stock is not named are taken to come from stocks of their own. */
const stockOf = (fit: Fitted): string => `${fit.lot}/${String(fit.conditions.stock ?? fit.seriesId)}`
const scaleOf = ({ conditions }: Fitted): number => typeof conditions.concScaleError_frac === 'number' ? conditions.concScaleError_frac : 0

/** Headline with the error of its line and that of its stock apart; null where it has none. */
function partsOf(fit: Fitted): SlopeWithErrors | null {
  const { value, se } = fit.outcome.series.headline
  const own = se === null ? Number.NaN : Math.sqrt(se ** 2 - (value * scaleOf(fit)) ** 2)
  return own > 0 ? { value, fitSe: own, scale_frac: scaleOf(fit), stock: stockOf(fit), dof: usedPoints(fit).length - 2 } : null
}

const usedPoints = (fit: Fitted) => fit.outcome.series.points.filter(point => point.excluded === null)

function groupDto({ kinds }: Pick<Deps, 'kinds'>, fits: readonly Fitted[]): RelaxivityGroup {
  const first = fits[0]!
  const headline = first.outcome.series.headline
  const parts = fits.flatMap(fit => partsOf(fit) ?? [])
  const replicates = parts.map(one => ({ value: one.value, se: Math.hypot(one.fitSe, one.value * one.scale_frac), commonSe: Math.abs(one.value) * one.scale_frac, preparation: one.stock }))
  const pooled = replicates.length === fits.length && fits.length > 1 ? poolReplicates(replicates) : null
  const agreement = parts.length === fits.length ? testAgreement(parts) : null
  const test = fits.length > 1 ? testEqualSlopes(fits.map(lineOf)) : null
  return {
    quantity: headline.name, label: headline.label, conditions: describeConditions(headline.label, first.conditions),
    series: fits.map((fit) => {
      const used = usedPoints(fit)
      const concs = used.map(point => point.x)
      return {
        seriesId: fit.seriesId, title: fit.title, kindTitle: kinds[fit.kind]?.title ?? fit.kind, lot: fit.lot, versionNo: fit.versionNo, state: fit.state, headline: fit.outcome.series.headline, tubes: used.length,
        range_mM: [Math.min(...concs), Math.max(...concs)],
      }
    }),
    pooled: pooled?.ok ? { value: pooled.value, se: pooled.se, interval: pooled.interval && [pooled.interval[0], pooled.interval[1]], preparations: pooled.preparations, betweenSd: pooled.betweenSd, homogeneityP: pooled.homogeneityP } : null,
    agree: agreement && { f: agreement.f, df1: agreement.dof1, df2: agreement.dof2, p: agreement.p, stocks: new Set(parts.map(one => one.stock)).size },
    parallel: test?.ok ? { f: test.f, df1: test.dof1, df2: test.dof2, p: test.p } : null,
  }
}

function lineOf(fit: Fitted): BatchLine {
  const used = usedPoints(fit)
  const errors = used.map(point => point.ySe)
  return { label: fit.lot, conc_mM: used.map(point => point.x), rate_per_s: used.map(point => point.y), rateSe_per_s: errors.every((se): se is number => se !== null && se > 0) ? errors : null }
}

/** r2/r1 of each pair of series of one batch measured alike; echo spacing belongs to r2 alone. */
function ratiosOf(fits: readonly Fitted[]): RelaxivityRatio[] {
  const ofDigit = (digit: string) => fits.filter(fit => nameOf(fit) === `r${digit}_per_mM_s`)
  return ofDigit('2').flatMap(r2 => ofDigit('1').filter(r1 => r1.batchId === r2.batchId && isAlike(r1.conditions, r2.conditions, ['b0_T', 'medium'])).flatMap((r1) => {
    const estimate = ratioOf(r1, r2)
    return estimate === null ? [] : [{ ...estimate, lot: r2.lot, conditions: describeConditions('r_2/r_1', r2.conditions), r1SeriesId: r1.seriesId, r2SeriesId: r2.seriesId }]
  }))
}

function ratioOf(r1: Fitted, r2: Fitted): Pick<RelaxivityRatio, 'value' | 'se' | 'interval' | 'tubes' | 'correlation' | 'method'> | null {
  const pairs = pairTubes(r1, r2)
  const found = bootstrapRatio(pairs, { seed: `${r1.seriesId}/${r1.versionNo}/${r2.seriesId}/${r2.versionNo}` })
  if (found) return { value: found.value, se: found.se, interval: found.interval && [found.interval[0], found.interval[1]], tubes: pairs.length, correlation: found.correlation, method: 'bootstrap' }
  const [a, b] = [r1.outcome.series.headline, r2.outcome.series.headline]
  if (!(a.value > 0)) return null
  const isOneStock = typeof r1.conditions.stock === 'string' && stockOf(r1) === stockOf(r2)
  const [own1, own2] = [partsOf(r1), partsOf(r2)]
  const relative = (own: SlopeWithErrors) => isOneStock ? own.fitSe / own.value : Math.hypot(own.fitSe / own.value, own.scale_frac)
  const se = own1 === null || own2 === null ? null : Math.abs(b.value / a.value) * Math.hypot(relative(own1), relative(own2))
  const half = se === null ? null : normalQuantile(0.975) * se
  const value = b.value / a.value
  return { value, se, interval: half === null ? null : [value - half, value + half], tubes: 0, correlation: null, method: isOneStock ? 'oneStock' : 'apart' }
}

/** Tubes of both series with one concentration; the same name settles which, where several share it. */
function pairTubes(r1: Fitted, r2: Fitted): PairedTube[] {
  const open = [...usedPoints(r2)]
  return usedPoints(r1).flatMap((one): PairedTube[] => {
    const alike = open.filter(other => Math.abs(other.x - one.x) <= 1e-6 * Math.max(1, one.x))
    const other = alike.find(each => each.label === one.label) ?? alike[0]
    if (!other) return []
    open.splice(open.indexOf(other), 1)
    return [{ conc_mM: one.x, rate1_per_s: one.y, rate1Se_per_s: one.ySe, rate2_per_s: other.y, rate2Se_per_s: other.ySe }]
  })
}
