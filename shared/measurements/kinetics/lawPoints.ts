import type { FittedTerm } from '../../science/kinetics/rateFit'
import { evaluateRateLaw, type RateLaw } from '../../science/kinetics/rateLaw'
import { hydrogen_M, RATE_TERMS, type CompetitorMetal, type RateConditions } from '../../science/kinetics/rateTerms'
import type { Activation } from '../../science/kinetics/temperatureFit'
import type { SeriesResult } from '../types'
import type { SeriesRate } from './seriesRates'

type Drawn = Pick<SeriesResult, 'points' | 'line' | 'band' | 'axes'>
interface Input {
  rates: readonly SeriesRate[]
  main: readonly SeriesRate[]
  law: RateLaw
  terms: readonly FittedTerm[]
  activation: Activation | null
}

const LINE_POINTS = 61
const RATE_AXIS = { label: 'k_{obs}', unit: 's^-1' } as const

/** What one variable a series was drawn against. */
interface Axis { label: string, unit: string | null, of: (rate: SeriesRate) => number, at: (x: number) => RateConditions }

const isMany = (values: readonly number[]): boolean => new Set(values.map(value => value.toPrecision(4))).size > 1

/** The variable that alone was varied; null where several were, or temperatures as well. */
function onlyAxis({ rates, main, activation }: Input): Axis | null {
  const first = main[0]!.point.conditions
  const metals = (['Zn', 'Cu', 'Ca'] as const).filter(metal => isMany(rates.map(rate => rate.point.conditions.competitors_M[metal] ?? 0)))
  const acid = isMany(rates.map(rate => rate.point.conditions.pH))
  if (activation !== null || metals.length + (acid ? 1 : 0) !== 1) return null
  if (acid) return { label: '[H^{+}]', unit: 'M', of: rate => hydrogen_M(rate.point.conditions.pH), at: x => ({ ...first, pH: -Math.log10(x) }) }
  const metal = metals[0] as CompetitorMetal
  return { label: `[${metal}]`, unit: 'M', of: rate => rate.point.conditions.competitors_M[metal] ?? 0, at: x => ({ ...first, competitors_M: { ...first.competitors_M, [metal]: x } }) }
}

/** The law at its best values: a term known as a bound only adds nothing to the curve, however it counts elsewhere. */
function lawAt({ law, terms }: Input, conditions: RateConditions): number {
  const seen: RateLaw = { ...law, constants: law.constants.filter(constant => constant.kind === '=') }
  const rate = seen.constants.length === 0 ? null : evaluateRateLaw(seen, conditions)
  return rate?.ok ? rate.value : terms.reduce((sum, term) => sum + (term.kind === '<' ? term.value : 0) * RATE_TERMS[term.name].factor(conditions), 0)
}

/** Rates against what alone was varied; where several things were, measured rates against those of the law, both logarithmic. */
export function lawPoints(input: Input): Drawn {
  const axis = onlyAxis(input)
  const points = input.rates.map(({ tubeNo, label, excluded, point }) => ({ tubeNo, label, excluded, y: point.rate_per_s, ySe: point.se_per_s, fitted: lawAt(input, point.conditions), studentised: null, cook: null, leaveOneOut: null }))
  if (axis === null) {
    const xs = points.map(point => point.fitted)
    const ends = [Math.min(...xs), Math.max(...xs)]
    return {
      points: points.map(point => ({ ...point, x: point.fitted })), line: ends.map(x => ({ x, y: x })), band: [],
      axes: { x: { label: 'k_{obs} by the law', unit: 's^-1', scale: 'log' }, y: { ...RATE_AXIS, scale: 'log' } },
    }
  }
  const xs = input.rates.map(axis.of)
  const [low, high] = [Math.min(...xs), Math.max(...xs)]
  const line = Array.from({ length: LINE_POINTS }, (_, i) => low + (high - low) * i / (LINE_POINTS - 1)).map(x => ({ x, y: lawAt(input, axis.at(x)) }))
  return {
    points: points.map((point, i) => ({ ...point, x: xs[i]! })), line, band: [],
    axes: { x: { label: axis.label, unit: axis.unit, scale: 'linear' }, y: { ...RATE_AXIS, scale: 'linear' } },
  }
}
