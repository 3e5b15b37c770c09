import { conditionWords } from '../../shared/evidence/conditionWords'
import { constantConditions } from '../../shared/evidence/constantConditions'
import { AppError } from '../../shared/errors'
import { groupBy } from '../../shared/groupBy'
import type { Conditions } from '../../shared/measurements/types'
import type { Donor, LigandPayload } from '../../shared/schemas/ligand'
import { comparable, type ConstantConditions } from '../../shared/science/equilibria/comparable'
import { basicity as sumOf } from '../../shared/science/equilibria/protonation'
import type { Donor as ListedDonor, LigandFacts } from '../../shared/science/ligands/donors'
import { ringAtomsOf } from './proposeFromSmiles'
import type { LigandEntry, LigandFact } from './ligandEntries'

/** ΣpKa with the number of protonation constants in it and what they belong to. */
export interface Basicity { sum: number, steps: number, words: string, conditions: ConstantConditions }

/** A ligand as the comparison reads it: the constant that counts, ΣpKa, half-lives in acid by acid, and what is to be said of them. */
export interface ReadLigand { entry: LigandEntry, facts: LigandFacts, constant: LigandFact | null, basicity: Basicity | null, acid: LigandFact[], formation: LigandFact | null, notes: string[] }

const LISTED: Readonly<Record<Donor['kind'], ListedDonor | null>> = {
  'amine N': 'amine', 'pyridine N': 'pyridine', 'carboxylate O': 'carboxylate', 'phosphonate O': 'phosphonate', 'phosphinate O': 'phosphinate', 'amide O': 'amide', 'hydroxyl O': 'alcohol', 'phenolate O': 'phenolate', 'other': null,
}

export const isPractice = ({ conditions }: LigandFact): boolean => conditions.method === 'practice'

export function readLigand(entry: LigandEntry): ReadLigand {
  const name = entry.origin === 'literature' ? `${entry.code} (literature)` : entry.code
  const constant = preferred(entry.constants)
  const basicity = basicityOf(entry, constant, name)
  const acid = [...groupBy(entry.acid, one => `${conditionWords(one)} ${String(one.conditions.method ?? '')}`).values()].map(group => preferred(group)!)
  return { entry, facts: factsOf(entry.payload, name), constant, basicity, acid, formation: preferred(entry.formation), notes: notesOn(constant, basicity, name) }
}

/** A signed value before another, a measured one before common practice, a value before a bound; of equals the newest. */
function preferred(facts: readonly LigandFact[]): LigandFact | null {
  const rank = (one: LigandFact): number => (one.signed ? 4 : 0) + (isPractice(one) ? 0 : 2) + (one.value.kind === '=' ? 1 : 0)
  return facts.reduce<LigandFact | null>((best, one) => best === null || rank(one) >= rank(best) ? one : best, null)
}

function factsOf({ donors, denticity, charge, topology, smiles }: LigandPayload, name: string): LigandFacts {
  const counts: Partial<Record<ListedDonor, number>> = {}
  for (const { kind, count } of donors) {
    const listed = LISTED[kind]
    if (listed) counts[listed] = (counts[listed] ?? 0) + count
  }
  return { name, donors: counts, denticity, charge, ringAtoms: topology === 'openChain' ? null : ringOf(smiles) }
}

/** A structure that can no longer be read says nothing of its ring; everything else of the ligand stands. */
function ringOf(smiles: string): number | 'unknown' {
  try {
    return ringAtomsOf(smiles) ?? 'unknown'
  }
  catch (error) {
    if (!(error instanceof AppError)) throw error
    return 'unknown'
  }
}

const stepsIn = ({ detail }: LigandFact): number[] => Array.isArray(detail.protonation) ? detail.protonation : []

/** ΣpKa of the record that holds the constant; without one, as registered with the ligand; else of another record. */
function basicityOf({ payload, others }: LigandEntry, constant: LigandFact | null, name: string): Basicity | null {
  const of = (steps: readonly number[], conditions: Conditions): Basicity =>
    ({ sum: Math.round(sumOf(steps) * 1000) / 1000, steps: steps.length, words: conditionWords({ conditions, detail: {}, quantity: 'logK' }), conditions: constantConditions(`ΣpKa of ${name}`, conditions) })
  const withSteps = others.filter(fact => stepsIn(fact).length > 0)
  const own = constant && withSteps.find(fact => fact.recordId === constant.recordId)
  if (own) return of(stepsIn(own), own.conditions)
  const { protonation } = payload
  if (protonation) return of(protonation.stepwiseLogK.map(step => step.value), { temperature_K: protonation.temperature_K, ionicStrength_M: protonation.ionicStrength_M, medium: protonation.medium })
  const other = withSteps.findLast(fact => fact.signed) ?? withSteps.at(-1)
  return other ? of(stepsIn(other), other.conditions) : null
}

function notesOn(constant: LigandFact | null, basicity: Basicity | null, name: string): string[] {
  if (!constant) return []
  const apart = basicity && comparable([constantConditions(`log K of ${name}`, constant.conditions), basicity.conditions])
  return [
    ...(isPractice(constant) ? ['log K is a figure of common practice, without conditions.'] : []),
    ...(typeof constant.detail.mediumNote === 'string' ? [constant.detail.mediumNote] : []),
    ...(apart && !apart.ok ? [apart.message] : []),
  ]
}
