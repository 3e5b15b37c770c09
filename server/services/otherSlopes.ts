import type { AnalysisOutcome, Conditions } from '../../shared/measurements/types'
import type { OtherSlopesDto } from '../../shared/schemas/check'
import { testEqualSlopes, type BatchLine } from '../../shared/science/relaxometry/ancova'
import type { Deps } from '../platform/deps'
import type { CheckSubject } from '../queries/checkSubjects'
import { comparableFits } from '../queries/comparableSeries'
import { findFitById } from '../queries/fits'
import { findSeries } from '../queries/series'

type Fitted = Extract<AnalysisOutcome, { ok: true }>

/** Conditions under which two slopes may be laid side by side; temperatures within half a kelvin. */
const SAME = ['b0_T', 'medium', 'quantity'] as const
const SAME_TEMPERATURE_K = 0.5

/**
 * Slopes of the agent's other series under the same conditions, other batches above all, and whether all of them can be one slope.
 * null for what is typed, for a refused fit, and where there is nothing to lay beside it.
 */
export async function otherSlopes(deps: Pick<Deps, 'db'>, programmeId: string, subject: CheckSubject): Promise<OtherSlopesDto | null> {
  if (subject.kind !== 'fit' || !subject.complexId) return null
  const [fit, series] = await Promise.all([findFitById(deps.db, programmeId, subject.id), findSeries(deps.db, programmeId, subject.chainId, 'programme')])
  const own = fit ? JSON.parse(fit.result) as AnalysisOutcome : null
  if (!own?.ok || !series) return null
  const all = await comparableFits(deps.db, programmeId, { complexId: subject.complexId, kind: subject.what })
  const others = all.flatMap(one => one.seriesId !== subject.chainId && isComparable(one.conditions, series.conditions) && one.outcome.ok && one.outcome.series.headline.name === own.series.headline.name
    ? [{ ...one, outcome: one.outcome }]
    : [])
  if (others.length === 0) return null
  const test = testEqualSlopes([lineOf(series.lot, own), ...others.map(one => lineOf(one.lot, one.outcome))])
  return {
    own: { lot: series.lot, headline: own.series.headline },
    others: others.map(({ seriesId, versionNo, lot, at, state, outcome }) => ({ seriesId, versionNo, lot, at: at.toISOString(), state, headline: outcome.series.headline })),
    equal: test.ok ? { f: test.f, df1: test.dof1, df2: test.dof2, p: test.p } : null,
  }
}

function isComparable(one: Conditions, other: Conditions): boolean {
  const temperatures = [one.temperature_K, other.temperature_K].map(Number)
  return SAME.every(key => (one[key] ?? null) === (other[key] ?? null)) && !(Math.abs(temperatures[0]! - temperatures[1]!) > SAME_TEMPERATURE_K)
}

function lineOf(label: string, { series }: Fitted): BatchLine {
  const used = series.points.filter(point => point.excluded === null)
  const errors = used.map(point => point.ySe)
  return { label, conc_mM: used.map(point => point.x), rate_per_s: used.map(point => point.y), rateSe_per_s: errors.every(se => se !== null && se > 0) ? errors as number[] : null }
}
