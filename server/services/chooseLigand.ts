import { conditionWords } from '../../shared/evidence/conditionWords'
import { constantConditions } from '../../shared/evidence/constantConditions'
import { formatCelsius, formatNumber } from '../../shared/format'
import type { Scope } from '../../shared/permissions'
import type { StatedQuantity } from '../../shared/schemas/agent'
import { TOPOLOGY_WORDS } from '../../shared/schemas/ligand'
import type { LigandChoiceDto, LigandChoiceQuery, LigandChoiceRow, LigandValueDto } from '../../shared/schemas/ligandChoice'
import { compareLigands, type Candidate } from '../../shared/science/ligands/compare'
import type { Need } from '../../shared/science/ligands/hints'
import { coordinationsOf, ionFacts, ionName, ionOf, radius_A, type Ion } from '../../shared/science/ligands/radii'
import { comparableTogether } from '../../shared/science/ligands/together'
import { placeAgents } from '../../shared/science/placement/place'
import type { Placement } from '../../shared/science/placement/types'
import type { Deps } from '../platform/deps'
import { readAgents, stated } from './agentView'
import { libraryLigands, programmeLigands, type LigandFact } from './ligandEntries'
import { basicityFigure, basicityLine, type BasicityLine } from './ligandLine'
import { readLigand, type ReadLigand } from './readLigand'
import { screeningProfile, type ProfileInUse } from './screeningProfile'

interface ChooseLigandInput { programmeId: string, scope: Scope, query: LigandChoiceQuery }

/** Ligands side by side for one metal: reasons in words, what was measured, what is estimated, and what is not known. Nobody wins. */
export async function chooseLigand(deps: Pick<Deps, 'db'>, { programmeId, scope, query }: ChooseLigandInput): Promise<LigandChoiceDto> {
  const { metal } = query
  const ion = ionOf(metal)!
  const need = needOf(ion, query)
  const [agents, inUse] = await Promise.all([readAgents(deps.db, programmeId, scope), screeningProfile(deps.db, programmeId)])
  const placements = placeAgents(agents.map(agent => agent.placement), inUse.profile, { includeUnsigned: scope !== 'signed' })
  const entries = [...await programmeLigands(deps, { programmeId, scope, metal, agents }), ...(query.library === '1' ? libraryLigands(metal) : [])]
  const ligands = entries.map(readLigand)
  const line = basicityLine(ligands)
  const radius = radius_A(ion, need.coordination)
  return {
    metal, ion: ionName(ion), radius_pm: radius === null ? null : Math.round(radius * 1000) / 10, coordination: need.coordination, waters: need.waters, coordinations: coordinationsOf(ion), profile: profileWords(inUse),
    ligands: ligands.map(ligand => toRow(ligand, { ion, need, line, placements, seesUnsigned: scope !== 'signed' })),
    ...sideBySide(ion, need, ligands), figure: basicityFigure(ligands, line, ionName(ion)), line: line.words,
  }
}

/** Coordination number and waters as asked, or as usual for the ion: nine sites leave one to water (common practice, no source). */
function needOf(ion: Ion, { coordination, waters }: LigandChoiceQuery): Need {
  const sites = coordination ?? ionFacts(ion).usual[0]!
  return { coordination: sites, waters: waters ?? (sites === 9 ? 1 : 0) }
}

const profileWords = ({ profile, name }: ProfileInUse): string => `pH ${formatNumber(profile.pH)}, ${formatCelsius(profile.temperature_K, 0)}; profile ${name}`

const HOUR_S = 3600
const MINUTE_S = 60
const NO_NUMBER = { logK: null, conditions: null, acidHalfLife_h: null, formation_min: null }

/** Acid and temperature in words; an acid that is not stated is the same as another only where both come from one statement. */
const acidPlace = (fact: LigandFact): string => [conditionWords(fact), fact.conditions.acid === 'notStated' && typeof fact.conditions.method === 'string' ? fact.conditions.method : ''].filter(Boolean).join('; ')

function candidateOf({ facts, constant, formation }: ReadLigand, acid: LigandFact | null): Candidate {
  return {
    ...NO_NUMBER, ligand: facts,
    ...(constant ? { logK: { value: constant.value.value, kind: constant.value.kind, basis: 'measured' as const }, conditions: constantConditions(facts.name, constant.conditions) } : {}),
    ...(acid ? { acidHalfLife_h: { value: { value: acid.value.value / HOUR_S, kind: acid.value.kind, basis: 'measured' as const }, at: acidPlace(acid) } } : {}),
    ...(formation ? { formation_min: { value: { value: formation.value.value / MINUTE_S, kind: formation.value.kind, basis: 'measured' as const }, at: conditionWords(formation) } } : {}),
  }
}

/** What the constants say of each other, and the pairs that equilibrium and acid order differently, among those that may be compared. */
function sideBySide(ion: Ion, need: Need, ligands: readonly ReadLigand[]): Pick<LigandChoiceDto, 'constants' | 'disagreements'> {
  const withConstant = ligands.filter(one => one.constant !== null)
  const { inside, warnings, outside } = comparableTogether(withConstant.map(one => constantConditions(one.facts.name, one.constant!.conditions)))
  const candidates = inside.flatMap(at => withConstant[at]!.acid.map(acid => candidateOf(withConstant[at]!, acid)))
  return {
    constants: [...warnings, ...outside.map(({ at, why }) => `${withConstant[at]!.facts.name} stands apart: ${why}`)],
    disagreements: [...new Set(compareLigands(ion, need, candidates).disagreements)],
  }
}

interface RowContext { ion: Ion, need: Need, line: BasicityLine, placements: readonly Placement[], seesUnsigned: boolean }

function toRow(ligand: ReadLigand, { ion, need, line, placements, seesUnsigned }: RowContext): LigandChoiceRow {
  const { entry, facts, constant, acid, formation, basicity, notes } = ligand
  const { key, code, origin, payload } = entry
  const [compared] = compareLigands(ion, need, [candidateOf(ligand, acid[0] ?? null)]).entries
  const halfLife = halfLifeOf(ligand, placements)
  const isOurs = origin === 'programme'
  return {
    key, code, name: payload.name, origin, topology: payload.topology, ringAtoms: typeof facts.ringAtoms === 'number' ? facts.ringAtoms : null, denticity: payload.denticity,
    donors: payload.donors.map(({ count, kind }) => `${count} ${kind}`).join(', ') || TOPOLOGY_WORDS[payload.topology], charge: payload.charge, complexCharge: ionFacts(ion).charge + payload.charge,
    hints: [...compared!.hints], sumPKa: basicity && { value: basicity.sum, steps: basicity.steps, conditions: basicity.words },
    logK: constant && valueOf(constant, conditionWords(constant)), estimate: isOurs ? line.estimateFor(ligand) : null, acidHalfLives: acid.map(fact => valueOf(fact, acidPlace(fact))), formation: formation && valueOf(formation, conditionWords(formation)), halfLife,
    unknown: seesUnsigned ? [...compared!.unknown, ...(isOurs && !halfLife ? ['rate law'] : [])] : null, notes: [...notes], agents: entry.agents.map(agent => agent.row.code),
  }
}

const valueOf = ({ value, checkState, source }: LigandFact, conditions: string): LigandValueDto => ({ value, state: checkState, conditions, source })

/** Half-life at the profile of an agent with this metal: a signed one before another. */
function halfLifeOf({ entry }: ReadLigand, placements: readonly Placement[]): StatedQuantity | null {
  const found = entry.agents.flatMap(agent => stated(placements.find(one => one.complexId === agent.row.id)?.halfLife_s ?? null, agent.evidence) ?? [])
  return found.find(one => one.state === 'signed') ?? found[0] ?? null
}
