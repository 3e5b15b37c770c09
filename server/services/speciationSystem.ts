import type { EvidenceItemDto } from '../../shared/evidence/item'
import type { SpeciationSystemDto, SpeciesDto } from '../../shared/schemas/stability'
import { PLASMA_COMPETITORS, PLASMA_SPECIES } from '../../shared/science/equilibria/media'
import { overallFromStepwise } from '../../shared/science/equilibria/protonation'
import type { AgentView } from './agentView'

/** The constants of an agent as a system that a species diagram can be drawn from; null without log K and protonation constants. */
export function speciationSystem({ evidence, payload }: AgentView): SpeciationSystemDto | null {
  const own = newest(evidence, 'logK')
  const ligandProtonation = listOf(own, 'protonation')
  if (!own || ligandProtonation.length === 0) return null
  const ofComplex = (key: string): number[] => { const given = listOf(own, key); return given.length > 0 ? given : listOf(newest(evidence, 'logKConditional'), key) }
  const complexProtonation = ofComplex('complexProtonation')
  const complexHydroxide = ofComplex('complexHydroxide')
  const stated = ofComplex('metalHydroxide')
  const metalHydroxide = stated.length > 0 ? stated : [PLASMA_SPECIES.find(one => one.name === 'LnOH')!.logBeta]
  const competing = PLASMA_COMPETITORS.flatMap((metal) => { const item = newest(evidence, `logK${metal}`); return item ? [{ metal, item }] : [] })
  const logK = own.value.value
  const id = own.id
  const species: SpeciesDto[] = [
    ...overallFromStepwise(ligandProtonation).map((logBeta, j) => ({ name: `${formula('H', j + 1)}L`, stoichiometry: { L: 1, H: j + 1 }, logBeta, evidenceId: id })),
    { name: 'LnL', stoichiometry: { Ln: 1, L: 1 }, logBeta: logK, evidenceId: id },
    ...overallFromStepwise(complexProtonation).map((logBeta, j) => ({ name: `Ln${formula('H', j + 1)}L`, stoichiometry: { Ln: 1, L: 1, H: j + 1 }, logBeta: logK + logBeta, evidenceId: id })),
    ...complexHydroxide.map((logBeta, j) => ({ name: `LnL${hydroxides(j + 1)}`, stoichiometry: { Ln: 1, L: 1, H: -(j + 1) }, logBeta: logK + logBeta, evidenceId: id })),
    ...metalHydroxide.map((logBeta, j) => ({ name: `Ln${hydroxides(j + 1)}`, stoichiometry: { Ln: 1, H: -(j + 1) }, logBeta, evidenceId: stated.length > 0 ? id : null })),
    ...competing.map(({ metal, item }) => ({ name: `${metal}L`, stoichiometry: { [metal]: 1, L: 1 }, logBeta: item.value.value, evidenceId: item.id })),
  ]
  return {
    metal: payload.metal, species, competitors: competing.map(one => one.metal), logK, ligandProtonation, complexProtonation, complexHydroxide, metalHydroxide,
    notes: notesOf(own, competing.map(one => one.item), { ownHydroxide: stated.length > 0, hasProtonated: complexProtonation.length > 0, metal: payload.metal }),
  }
}

const formula = (element: string, count: number): string => count === 1 ? element : `${element}_${count}`
const hydroxides = (count: number): string => count === 1 ? '(OH)' : `(OH)_${count}`

function listOf(item: EvidenceItemDto | undefined, key: string): number[] {
  const value = item?.detail[key]
  return Array.isArray(value) ? value : []
}

function notesOf(own: EvidenceItemDto, competitors: readonly EvidenceItemDto[], { ownHydroxide, hasProtonated, metal }: { ownHydroxide: boolean, hasProtonated: boolean, metal: string }): string[] {
  const bounds = [own, ...competitors].filter(item => item.value.kind !== '=').map(item => `log K with ${String(item.detail.metal ?? metal)} is a bound, ${item.value.kind === '<' ? 'less' : 'more'} than ${item.value.value}: drawn as if it were the value.`)
  const place = (item: EvidenceItemDto): string => `${String(item.conditions.ionicStrength_M)} M ${String(item.conditions.medium)}, ${String(item.conditions.temperature_K)} K`
  const places = new Set([own, ...competitors].map(place))
  return [
    ...bounds,
    ...(places.size > 1 ? [`Constants from different media are used together, as they are: ${[...places].join('; ')}.`] : []),
    ...(typeof own.detail.mediumNote === 'string' ? [own.detail.mediumNote] : []),
    ...(ownHydroxide ? [] : [`The hydroxide of ${metal} is that of gadolinium in the plasma model, from memory.`]),
    ...(hasProtonated ? [] : ['No protonated complex is known: below about pH 4 less may be bound, or more, than drawn.']),
    'pH is taken as −log [H^{+}].',
  ]
}

function newest(evidence: readonly EvidenceItemDto[], quantity: string): EvidenceItemDto | undefined {
  const all = evidence.filter(item => item.quantity === quantity)
  return all.filter(item => item.signed).at(-1) ?? all.at(-1)
}
