import { overallFromStepwise } from '../../science/equilibria/protonation'
import type { Species } from '../../science/equilibria/system'
import { CARBONATE_SPECIES } from '../../science/titration/curves'
import type { TitrationSystem } from '../../science/titration/refine'
import type { AnalysisInput } from '../types'
import { typedList } from './conditions'
import type { CurvePlan } from './curveOf'
import { chosen, hasHydroxo, hasProtonated } from './options'

/** Where a protonated and a hydroxo complex start when nothing is typed: usual orders of size (common practice, no source). */
const START_MHL = 3
const START_MLOH = -9
const START_ML = 15

export interface Refusal { readonly ok: false, readonly reason: string, readonly message: string, readonly accepted: string }
export interface PlannedSystem { readonly system: TitrationSystem, /** log K of ML is refined and nothing says where it starts. */ readonly isOpen: boolean, readonly protons: number }

/** Name of the ligand with j protons. */
export const protonated = (j: number): string => `H${j === 1 ? '' : j}L`

/** Species, starts and what is refined, by model, options and typed constants. */
export function systemOf(input: AnalysisInput, plans: readonly CurvePlan[], pKw: number): PlannedSystem | Refusal {
  const { conditions, modelId } = input
  const steps = typedList(conditions.protonation) ?? []
  if (steps.length === 0) return { ok: false, reason: 'noProtonation', message: 'Nothing says the protonation constants of the ligand.', accepted: 'stepwise log K among the conditions, most basic first, such as 9.5; 6.2; 2.7' }
  const loose = chosen(input, 'logKML') === 'refine' ? (['logKMHL', 'logKMLOH'] as const).find(key => isIn(key, modelId) && chosen(input, key) === 'hold') : undefined
  if (loose) return { ok: false, reason: 'holdsStep', message: `${loose} is a step from ML and cannot be held while log K of ML is refined.`, accepted: 'both held, or both refined' }
  const missing = (['logKML', 'logKMHL', 'logKMLOH'] as const).find(key => chosen(input, key) === 'hold' && isIn(key, modelId) && typeof conditions[key] !== 'number')
  if (missing) return { ok: false, reason: 'nothingToHold', message: `${missing} is to be held and has no value.`, accepted: 'its value among the conditions, or refined' }
  const metal = plans.some(plan => plan.role === 'complex')
  const carbonate = typeof conditions.carbonate_mM === 'number' && conditions.carbonate_mM > 0
  const how = chosen(input, 'protonation')
  const refinesLigand = how === 'refine' || (how === 'auto' && plans.some(plan => plan.role === 'ligand'))
  const refine = [
    ...(refinesLigand ? steps.map((_, j) => protonated(j + 1)) : []),
    ...(metal ? [['ML', 'logKML'] as const, ['MHL', 'logKMHL'] as const, ['MLOH', 'logKMLOH'] as const].flatMap(([name, key]) => isIn(key, modelId) && chosen(input, key) === 'refine' ? [name] : []) : []),
  ]
  if (refine.length === 0) return { ok: false, reason: 'nothingToRefine', message: metal ? 'Every constant is held.' : 'The curves hold no metal, and the protonation constants are held.', accepted: 'at least one constant to refine' }
  const ML = numberOf(conditions.logKML) ?? START_ML
  return {
    protons: steps.length, isOpen: refine.includes('ML') && numberOf(conditions.logKML) === null,
    system: {
      components: [...(metal ? ['M'] : []), 'L', 'H', ...(carbonate ? ['CO3'] : [])], refine,
      species: [
        { name: 'OH', stoichiometry: { H: -1 }, logBeta: -pKw }, ...overallFromStepwise(steps).map((logBeta, j): Species => ({ name: protonated(j + 1), stoichiometry: { L: 1, H: j + 1 }, logBeta })),
        ...(metal ? complexSpecies(input, ML) : []), ...(carbonate ? CARBONATE_SPECIES : []),
      ],
    },
  }
}

const numberOf = (value: unknown): number | null => (typeof value === 'number' ? value : null)
const isIn = (key: 'logKML' | 'logKMHL' | 'logKMLOH', modelId: string): boolean => key === 'logKML' || (key === 'logKMHL' ? hasProtonated(modelId) : hasHydroxo(modelId))

function complexSpecies({ conditions, modelId }: AnalysisInput, ML: number): Species[] {
  return [
    { name: 'ML', stoichiometry: { M: 1, L: 1 }, logBeta: ML },
    ...(hasProtonated(modelId) ? [{ name: 'MHL', stoichiometry: { M: 1, L: 1, H: 1 }, logBeta: ML + (numberOf(conditions.logKMHL) ?? START_MHL) }] : []),
    ...(hasHydroxo(modelId) ? [{ name: 'MLOH', stoichiometry: { M: 1, L: 1, H: -1 }, logBeta: ML + (numberOf(conditions.logKMLOH) ?? START_MLOH) }] : []),
    ...(typedList(conditions.metalHydroxide) ?? []).map((logBeta, j) => ({ name: `MOH${j + 1}`, stoichiometry: { M: 1, H: -(j + 1) }, logBeta })),
  ]
}

/** The system with other values of some log β, and with other things refined. */
export function withValues(system: TitrationSystem, values: ReadonlyMap<string, number>, refine = system.refine): TitrationSystem {
  return { ...system, refine, species: system.species.map(one => values.has(one.name) ? { ...one, logBeta: values.get(one.name)! } : one) }
}

/** ML and what is made of it moved to another log K, steps kept. */
export function withComplexAt(system: TitrationSystem, logK: number): TitrationSystem {
  const shift = logK - system.species.find(one => one.name === 'ML')!.logBeta
  return withValues(system, new Map(system.species.filter(one => one.stoichiometry.M === 1 && one.stoichiometry.L === 1).map(one => [one.name, one.logBeta + shift])))
}
