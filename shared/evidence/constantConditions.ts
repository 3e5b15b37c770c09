import type { Conditions } from '../measurements/types'
import { comparable, type Comparison, type ConstantConditions } from '../science/equilibria/comparable'
import type { EvidenceItemDto } from './item'

/** Cation of each electrolyte that a record can name; what is not listed is another cation, what is not stated none. */
const CATIONS: Readonly<Record<string, ConstantConditions['cation']>> = {
  KCl: 'K', KNO3: 'K', NaCl: 'Na', NaClO4: 'Na', NMe4Cl: 'tetraalkylammonium', NMe4NO3: 'tetraalkylammonium', NEt4ClO4: 'tetraalkylammonium', other: 'other', water: 'other', notStated: null,
}

/** The conditions of a constant as the comparison of constants reads them. `label` names the constant in its sentences. */
export function constantConditions(label: string, { ionicStrength_M, temperature_K, medium, pHScale }: Conditions): ConstantConditions {
  return {
    label, ionicStrength_M: typeof ionicStrength_M === 'number' ? ionicStrength_M : null, temperature_K: typeof temperature_K === 'number' ? temperature_K : null,
    cation: typeof medium === 'string' ? medium in CATIONS ? CATIONS[medium]! : 'other' : null,
    phScale: pHScale === 'activity' || pHScale === 'concentration' ? pHScale : null,
  }
}

/** What a comparison says: why the constants may not be held against each other and what would be accepted, or what was taken on trust. */
export const comparisonWords = (comparison: Comparison): string[] => comparison.ok ? [...comparison.warnings] : [`${comparison.message} Accepted: ${comparison.accepted}`]

const isConstant = ({ quantity }: EvidenceItemDto): boolean => quantity.startsWith('logK') && quantity !== 'logKConditional'

/** Whether constants of several records may stand beside each other, in words; nothing where all come from one record. */
export function constantsSideBySide(evidence: readonly EvidenceItemDto[]): string[] {
  const constants = evidence.filter(isConstant)
  if (new Set(constants.map(item => item.origin.id)).size < 2) return []
  return comparisonWords(comparable(constants.map(item => constantConditions(`log K with ${String(item.conditions.metal ?? item.detail.metal)}, ${item.value.value},`, item.conditions))))
}
