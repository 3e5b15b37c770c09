/** Draws of the dissociation rate: constants of one fit with their correlation, bounds as bounds, a shared scale factor once. */
import { carryFactor } from '../kinetics/eyring'
import { rateGradient } from '../kinetics/rateGradient'
import { hydrogen_M, RATE_TERMS, type RateConditions, type RateConstantName, type SumConstant } from '../kinetics/rateTerms'
import { exactExp } from '../exactMath'
import { above, below, choleskyOf, correlate, logNormal, normals, type Seed } from './sampling'
import type { RateConstant, RateLaw } from '../kinetics/rateLaw'

export interface RateDraws {
  readonly ok: true
  readonly kd_per_s: Float64Array
  /** Constants without an error: they do not vary in the draws. */
  readonly fixed: readonly string[]
}

export interface DrawsRefused {
  readonly ok: false
  readonly reason: 'correlationNotPossible'
  readonly message: string
}

/** `draws` values of k_d under the profile's conditions. `scale` holds the shared deviates of the fit's common factor, if it has one. */
export function drawRate(law: RateLaw, conditions: RateConditions, how: { seed: Seed, draws: number, scale: Float64Array | null }): RateDraws | DrawsRefused {
  const { seed, draws, scale } = how
  const { constants } = law
  const correlation = law.correlation ?? ((): number => 0)
  const factor = choleskyOf(constants.length, (i, j) => correlation(constants[i]!.evidenceId, constants[j]!.evidenceId))
  if (factor === null) return { ok: false, reason: 'correlationNotPossible', message: 'the correlations stated for the rate constants cannot all hold' }
  const deviates = correlate(factor, constants.map(c => normals(seed, ['item', c.evidenceId], draws)))
  const share = law.sharedScale_frac ?? 0
  const common = scale === null ? null : logNormal(1, share, scale)
  const drawn = constants.map((c, i) => drawConstant(c, { z: deviates[i]!, share, common, conditions, seed }))
  return { ok: true, kd_per_s: combine(law, drawn, conditions, draws), fixed: constants.filter(c => c.kind === '=' && c.se === null).map(c => c.evidenceId) }
}

function drawConstant(constant: RateConstant, how: { z: Float64Array, share: number, common: Float64Array | null, conditions: RateConditions, seed: Seed }): Float64Array {
  const { z, share, common, conditions, seed } = how
  const values = ownDraws(constant, z, common === null ? 0 : share)
  const binding = constant.name === 'kProton_per_M' || constant.name === 'kMetal_per_M'
  if (common !== null && constant.kind === '=' && !binding) for (let d = 0; d < values.length; d++) values[d]! *= common[d]!
  if (binding) return values
  const move = carryFactor(constant, conditions.temperature_K)
  const tilt = move.relativeSe > 0 ? normals(seed, ['enthalpy', constant.evidenceId], z.length) : null
  for (let d = 0; d < values.length; d++) values[d]! *= tilt === null ? move.factor : move.factor * exactExp(move.relativeSe * tilt[d]!)
  return values
}

function ownDraws(constant: RateConstant, z: Float64Array, share: number): Float64Array {
  if (constant.kind === '<') return below(constant.value, z)
  if (constant.kind === '>') return above(constant.value, z)
  if (constant.se === null) return z.map(() => constant.value)
  const own = constant.se * constant.se - (share * constant.value) * (share * constant.value)
  return logNormal(constant.value, Math.sqrt(Math.max(0, own)), z)
}

function combine(law: RateLaw, drawn: readonly Float64Array[], conditions: RateConditions, draws: number): Float64Array {
  const kd = new Float64Array(draws)
  if (law.form === 'sum') {
    for (const [i, constant] of law.constants.entries()) {
      if (!(constant.name in RATE_TERMS)) continue
      const weight = RATE_TERMS[constant.name as SumConstant].factor(conditions)
      if (weight !== 0) for (let d = 0; d < draws; d++) kd[d]! += weight * drawn[i]![d]!
    }
    return kd
  }
  const metal_M = law.metal ? conditions.competitors_M[law.metal] ?? 0 : 0
  const hydrogen = hydrogen_M(conditions.pH)
  const values: Partial<Record<RateConstantName, number>> = {}
  for (let d = 0; d < draws; d++) {
    for (const [i, constant] of law.constants.entries()) values[constant.name] = drawn[i]![d]!
    kd[d] = rateGradient(values, hydrogen, metal_M).value
  }
  return kd
}
