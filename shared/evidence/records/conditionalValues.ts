import type { Conditions } from '../../measurements/types'
import { conditionalConstant, pM, PM_CONVENTION, type ComplexConstants } from '../../science/equilibria/conditional'
import { comparable } from '../../science/equilibria/comparable'
import { protonShares } from '../../science/equilibria/protonation'
import { constantConditions } from '../constantConditions'
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
  /** log *β of ML + j H₂O = ML(OH)_j + j H and of M + j H₂O = M(OH)_j + j H. */
  complexHydroxide: readonly number[]
  metalHydroxide: readonly number[]
  conditions: Conditions
}

/** In what the two sets of constants differ, in words; null where they belong together. */
export function mediumDifference(conditions: Conditions, registered: NonNullable<RecordContext['ligandProtonation']>): string | null {
  if (typeof conditions.ionicStrength_M !== 'number' || typeof conditions.medium !== 'string') return 'The medium of log K is not stated: with the protonation constants of the ligand it is taken on trust.'
  const { temperature_K, ionicStrength_M, medium } = registered
  const comparison = comparable([constantConditions('log K', conditions), constantConditions('the set of protonation constants', { temperature_K, ionicStrength_M, medium })])
  const media = conditions.medium === medium ? '' : `, ${conditions.medium} and ${medium}`
  if (!comparison.ok) return `log K and protonation constants come from different media${media}: ${comparison.message} Accepted: ${comparison.accepted}`
  return media ? `log K and protonation constants come from different media${media}.` : null
}

/**
 * The conditional constant and pM at pH 7.4 that follow from a stability constant: 1:1, side reactions with protons, and with hydroxide as far as the record
 * states them, pH taken as −log [H⁺] as in published values. Nothing where no protonation constant is known. A bound on log K is the same bound on both, because both rise with it.
 */
export function conditionalAtBloodPH(input: EquilibriumInput, metal: string): EvidenceDraft[] {
  const steps = input.own ?? input.registered?.steps
  if (!steps || steps.length === 0) return []
  const { pcH, metal_M, ligand_M } = PM_CONVENTION
  const constants: ComplexConstants = { logK: input.logK.value, ligandProtonation: steps.map(step => step.value), complexProtonation: input.complexProtonation, complexHydroxide: input.complexHydroxide, metalHydroxide: input.metalHydroxide }
  const se = input.logK.kind === '=' ? conditionalSe(input.logK.se, steps, pcH) : null
  const difference = input.own ? null : mediumDifference(input.conditions, input.registered!)
  const detail: EvidenceDraft['detail'] = {
    metal, protonationFrom: input.own ? 'this record' : 'the ligand', mixedMedia: difference !== null, mediumNote: difference,
    protonation: [...constants.ligandProtonation], logK: input.logK.value, complexProtonation: [...input.complexProtonation], complexHydroxide: [...input.complexHydroxide], metalHydroxide: [...input.metalHydroxide],
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
 * pM carries the same error. Constants of protonated and hydroxo complexes are taken as exact. Null where any error is not known.
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
