import type { Conditions } from '../../measurements/types'
import { conditionalConstant, pM, PM_CONVENTION, type ComplexConstants } from '../../science/equilibria/conditional'
import { protonShares } from '../../science/equilibria/protonation'
import type { EvidenceDraft } from '../types'
import { draftOf } from './common'
import type { RecordContext } from './define'
import type { Step, StoredValue } from './values'

export interface EquilibriumInput {
  logK: StoredValue
  /** Protonation constants of the same record; null = those registered with the ligand. */
  own: readonly Step[] | null
  registered: RecordContext['ligandProtonation']
  complexProtonation: readonly number[]
  conditions: Conditions
}

/** Ionic strengths further apart than this count as different media. */
const SAME_IONIC_STRENGTH_M = 0.02
const SAME_TEMPERATURE_K = 2

/** In what the two sets of constants differ, in words; null where they belong together. */
export function mediumDifference(conditions: Conditions, registered: NonNullable<RecordContext['ligandProtonation']>): string | null {
  const parts: string[] = []
  if (typeof conditions.medium === 'string' && conditions.medium !== registered.medium) parts.push(`electrolyte ${conditions.medium} and ${registered.medium}`)
  if (typeof conditions.ionicStrength_M === 'number' && Math.abs(conditions.ionicStrength_M - registered.ionicStrength_M) > SAME_IONIC_STRENGTH_M) {
    parts.push(`ionic strength ${conditions.ionicStrength_M} and ${registered.ionicStrength_M} M`)
  }
  if (typeof conditions.temperature_K === 'number' && Math.abs(conditions.temperature_K - registered.temperature_K) > SAME_TEMPERATURE_K) {
    parts.push(`temperature ${conditions.temperature_K} and ${registered.temperature_K} K`)
  }
  return parts.length > 0 ? `log K and protonation constants come from different media: ${parts.join('; ')}.` : null
}

/**
 * The conditional constant and pM at pH 7.4 that follow from a stability constant: 1:1, side reactions with protons only, pH taken as −log [H⁺] as in
 * published values. Nothing where no protonation constant is known. A bound on log K is the same bound on both, because both rise with it.
 */
export function conditionalAtBloodPH(input: EquilibriumInput, metal: string): EvidenceDraft[] {
  const steps = input.own ?? input.registered?.steps
  if (!steps || steps.length === 0) return []
  const { pcH, metal_M, ligand_M } = PM_CONVENTION
  const constants: ComplexConstants = { logK: input.logK.value, ligandProtonation: steps.map(step => step.value), complexProtonation: input.complexProtonation }
  const se = input.logK.kind === '=' ? conditionalSe(input.logK.se, steps, pcH) : null
  const difference = input.own ? null : mediumDifference(input.conditions, input.registered!)
  const detail: EvidenceDraft['detail'] = {
    metal, protonationFrom: input.own ? 'this record' : 'the ligand', mixedMedia: difference !== null, mediumNote: difference,
    protonation: [...constants.ligandProtonation], logK: input.logK.value, complexProtonation: [...input.complexProtonation],
  }
  const conditions: Conditions = { ...input.conditions, metal, pH: pcH }
  const { logKCond } = conditionalConstant(constants, pcH)
  return [
    draftOf({ quantity: 'logKConditional', stored: { value: logKCond, kind: input.logK.kind, se }, conditions, detail }),
    draftOf({ quantity: 'pM', stored: { value: pM(constants), kind: input.logK.kind, se }, conditions: { ...conditions, metal_M, ligand_M }, detail }),
  ]
}

/**
 * Standard error of log K cond by propagation: ∂ log α_H / ∂ log K_j is the share of the ligand that holds j protons or more. With ligand in excess,
 * pM carries the same error. Null where any error is not known.
 */
export function conditionalSe(logK_se: number | null, steps: readonly Step[], pcH: number): number | null {
  if (logK_se === null) return null
  const shares = protonShares(steps.map(step => step.value), pcH)
  let variance = logK_se ** 2
  for (const [j, { se }] of steps.entries()) {
    if (se === null) return null
    const holdingMore = shares.slice(j + 1).reduce((sum, share) => sum + share, 0)
    variance += (holdingMore * se) ** 2
  }
  return Math.sqrt(variance)
}
