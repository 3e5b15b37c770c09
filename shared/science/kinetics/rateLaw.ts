/**
 * The rate at which a complex lets go of its metal under given conditions, from the constants of its rate law,
 * with its error, and as a bound where a term is known only as one.
 */
import { carryFactor, type CarriedFactor, type TemperatureOfConstant } from './eyring'
import { logInterval, type RateValue } from './firstOrder'
import { rateGradient } from './rateGradient'
import { hydrogen_M, RATE_TERMS, SUM_CONSTANTS, type CompetitorMetal, type RateConditions, type RateConstantName, type SumConstant } from './rateTerms'

export interface RateConstant extends TemperatureOfConstant {
  readonly name: RateConstantName
  readonly value: number
  /** '<': a one-sided 95 % upper bound of a term that the data cannot exclude. */
  readonly kind: '=' | '<' | '>'
  readonly se: number | null
  /** Range of pH over which it was measured; null where not stated. */
  readonly pHMin: number | null
  readonly pHMax: number | null
  readonly evidenceId: string
}

export interface RateLaw {
  readonly form: 'sum' | 'saturation'
  readonly constants: readonly RateConstant[]
  /** The metal that k3 and K(M) of a saturation law belong to. */
  readonly metal?: CompetitorMetal
  /** Correlation of two constants of one fit, by evidence id; 0 where not stated. */
  readonly correlation?: (a: string, b: string) => number
  /** Relative standard error of a factor shared by all constants (part of each constant's own error). */
  readonly sharedScale_frac?: number
}

export interface RateResult extends RateValue {
  readonly ok: true
  /** Rate that each constant adds, or the bound on it; in the saturation form the change of k per relative change of the constant. */
  readonly terms: readonly { readonly name: RateConstantName, readonly rate_per_s: number, readonly kind: '=' | '<' | '>', readonly carried: CarriedFactor['status'] }[]
  /** How far the pH lies outside the measured range, in powers of ten of [H⁺]; null where no range is stated. */
  readonly decadesExtrapolated: number | null
  /** Competitors present for which no constant is known: left out of the sum. */
  readonly leftOut: readonly CompetitorMetal[]
  readonly evidenceIds: readonly string[]
}

export interface RateRefused {
  readonly ok: false
  readonly reason: 'noConstants' | 'incompleteSaturation' | 'notPositive' | 'boundInSaturation'
  readonly message: string
}

interface Carried {
  readonly constant: RateConstant
  readonly move: CarriedFactor
  readonly value: number
  readonly relativeSe: number | null
}

const isBinding = (name: RateConstantName): boolean => name === 'kProton_per_M' || name === 'kMetal_per_M'

function carry(constant: RateConstant, to_K: number): Carried {
  // an activation enthalpy belongs to a rate; a binding constant is used as measured
  const move: CarriedFactor = isBinding(constant.name) ? { factor: 1, relativeSe: 0, status: 'sameTemperature' } : carryFactor(constant, to_K)
  const own = constant.se === null ? null : constant.se / constant.value
  return { constant, move, value: constant.value * move.factor, relativeSe: own === null ? null : Math.hypot(own, move.relativeSe) }
}

/** Evaluates a rate law. Terms whose competitor is absent add nothing and need no constant. */
export function evaluateRateLaw(law: RateLaw, conditions: RateConditions): RateResult | RateRefused {
  const refuse = (reason: RateRefused['reason'], message: string): RateRefused => ({ ok: false, reason, message })
  if (law.constants.length === 0) return refuse('noConstants', 'no rate constant is known')
  const bad = law.constants.find(c => !(c.value > 0))
  if (bad) return refuse('notPositive', `${bad.name} is not above zero: state it as a bound`)
  const carried = law.constants.map(constant => carry(constant, conditions.temperature_K))
  return law.form === 'sum' ? evaluateSum(law, carried, conditions) : evaluateSaturation(law, carried, conditions)
}

function evaluateSum(law: RateLaw, carried: readonly Carried[], conditions: RateConditions): RateResult | RateRefused {
  const inForm = carried.filter((c): c is Carried & { constant: { name: SumConstant } } => SUM_CONSTANTS.includes(c.constant.name as SumConstant))
  const rates = inForm.map(c => ({ ...c, rate: c.value * RATE_TERMS[c.constant.name].factor(conditions) })).filter(c => c.rate > 0)
  if (rates.length === 0) return { ok: false, reason: 'noConstants', message: 'no rate constant applies under these conditions' }
  const total = (kind: '=' | '<' | '>'): number => rates.filter(c => c.constant.kind === kind).reduce((sum, c) => sum + c.rate, 0)
  const exact = rates.filter(c => c.constant.kind === '=')
  const se = combinedSe(law, exact.map(c => ({ carried: c, weight: c.rate })))
  return {
    ok: true, ...combineBounds({ exact: total('='), below: total('<'), above: total('>'), se }),
    terms: rates.map(c => ({ name: c.constant.name, rate_per_s: c.rate, kind: c.constant.kind, carried: c.move.status })),
    decadesExtrapolated: decadesOutside(law.constants, conditions.pH),
    leftOut: unknownCompetitors(law.constants, conditions),
    evidenceIds: rates.map(c => c.constant.evidenceId),
  }
}

/**
 * Exact terms with bounded ones. Bounds that add up to less than the exact part widen its interval upwards; once they exceed it, the
 * sum is itself only a bound. A term known only as "at least" makes the sum "at least".
 */
export function combineBounds(parts: { exact: number, below: number, above: number, se: number | null }): RateValue {
  const { exact, below, above, se } = parts
  if (above > 0) return { value: exact + above, kind: '>', se: null, interval: null }
  const own = se === null || exact === 0 ? null : logInterval(exact, se)
  if (below > exact) return { value: (own?.[1] ?? exact) + below, kind: '<', se: null, interval: null }
  return {
    value: exact, kind: '=',
    // a bound at 95 % is read as a half-normal of that width
    se: se === null ? null : Math.hypot(se, below / 1.959963984540054),
    interval: own === null ? null : [own[0], own[1] + below],
  }
}

/** Standard error of Σ weight_i (relative errors correlated as stated); null where one error is not known. */
function combinedSe(law: RateLaw, parts: readonly { carried: Carried, weight: number }[]): number | null {
  const scale = law.sharedScale_frac ?? 0
  let variance = 0
  let weightSum = 0
  const own: number[] = []
  for (const { carried, weight } of parts) {
    if (carried.relativeSe === null) return null
    own.push(weight * Math.sqrt(Math.max(0, carried.relativeSe ** 2 - scale ** 2)))
    weightSum += weight
  }
  for (let i = 0; i < parts.length; i++) {
    variance += own[i]! ** 2
    for (let j = 0; j < i; j++) variance += 2 * own[i]! * own[j]! * (law.correlation?.(parts[i]!.carried.constant.evidenceId, parts[j]!.carried.constant.evidenceId) ?? 0)
  }
  return Math.sqrt(Math.max(0, variance) + (scale * weightSum) ** 2)
}

function evaluateSaturation(law: RateLaw, carried: readonly Carried[], conditions: RateConditions): RateResult | RateRefused {
  if (carried.some(c => c.constant.kind !== '=')) return { ok: false, reason: 'boundInSaturation', message: 'a bound cannot be used in the saturation form: state the sum form instead' }
  const values: Partial<Record<RateConstantName, number>> = {}
  for (const c of carried) values[c.constant.name] = c.value
  const needsProton = values.k1_per_s !== undefined || values.kProton_per_M !== undefined
  const needsMetal = values.k3_per_s !== undefined || values.kMetal_per_M !== undefined
  if ((needsProton && (values.k1_per_s === undefined || values.kProton_per_M === undefined)) || (needsMetal && (values.k3_per_s === undefined || values.kMetal_per_M === undefined || !law.metal))) {
    return { ok: false, reason: 'incompleteSaturation', message: 'the saturation form needs k1 with K(H), and k3 with K(M) and its metal' }
  }
  const metal_M = law.metal ? conditions.competitors_M[law.metal] ?? 0 : 0
  const { value, relative } = rateGradient(values, hydrogen_M(conditions.pH), metal_M)
  const used = carried.filter(c => (relative[c.constant.name] ?? 0) !== 0)
  if (!(value > 0)) return { ok: false, reason: 'noConstants', message: 'no rate constant applies under these conditions' }
  const se = combinedSe(law, used.map(c => ({ carried: c, weight: relative[c.constant.name]! })))
  return {
    ok: true, value, kind: '=', se, interval: se === null ? null : logInterval(value, se),
    terms: used.map(c => ({ name: c.constant.name, rate_per_s: relative[c.constant.name]!, kind: '=', carried: c.move.status })),
    decadesExtrapolated: decadesOutside(law.constants, conditions.pH),
    leftOut: unknownCompetitors(law.constants, conditions, law.metal),
    evidenceIds: used.map(c => c.constant.evidenceId),
  }
}

/** Furthest distance of `pH` from the measured range of a constant; null where none states a range. */
function decadesOutside(constants: readonly RateConstant[], pH: number): number | null {
  let most: number | null = null
  for (const { pHMin, pHMax } of constants) {
    if (pHMin === null || pHMax === null) continue
    most = Math.max(most ?? 0, pHMin - pH, pH - pHMax)
  }
  return most
}

function unknownCompetitors(constants: readonly RateConstant[], conditions: RateConditions, known?: CompetitorMetal): CompetitorMetal[] {
  const named = new Set<CompetitorMetal | null>(constants.map(c => (c.name in RATE_TERMS ? RATE_TERMS[c.name as SumConstant].metal : null)))
  return (['Zn', 'Cu', 'Ca'] as const).filter(metal => (conditions.competitors_M[metal] ?? 0) > 0 && !named.has(metal) && metal !== known)
}
