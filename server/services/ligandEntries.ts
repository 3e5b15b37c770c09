import type { EvidenceDraft } from '../../shared/evidence/types'
import type { EvidenceItemDto } from '../../shared/evidence/item'
import { recordKind } from '../../shared/evidence/records/index'
import { groupBy } from '../../shared/groupBy'
import { LIBRARY } from '../../shared/library/index'
import type { LibraryConstant, LibraryLigand } from '../../shared/library/define'
import type { Scope } from '../../shared/permissions'
import { LigandPayload } from '../../shared/schemas/ligand'
import type { SourceInput } from '../../shared/schemas/source'
import { ionSymbol } from '../../shared/science/ligands/radii'
import type { Deps } from '../platform/deps'
import { listLigandRows } from '../queries/ligands'
import { readVersions } from '../queries/versions'
import type { AgentView } from './agentView'

/** One number that a record says of a ligand. checkState null: from the starter library, with its source in words. */
export interface LigandFact extends Pick<EvidenceItemDto, 'quantity' | 'value' | 'conditions' | 'detail' | 'signed'> { checkState: EvidenceItemDto['checkState'] | null, recordId: string, source: string | null }

/** A ligand with what is known of it with one metal. `constants` are log K with that metal, oldest first, `others` what else its agents and records say. */
export interface LigandEntry { key: string, code: string, origin: 'programme' | 'literature', payload: LigandPayload, constants: LigandFact[], acid: LigandFact[], formation: LigandFact[], others: LigandFact[], agents: AgentView[] }

const isConstantWith = ({ quantity, conditions }: LigandFact, metal: string): boolean =>
  quantity.startsWith('logK') && !quantity.startsWith('logKWith') && quantity !== 'logKConditional' && conditions.metal === metal

/** The programme's ligands. Those who see signed values only see the ligands of agents that have one. */
export async function programmeLigands({ db }: Pick<Deps, 'db'>, { programmeId, scope, metal, agents }: { programmeId: string, scope: Scope, metal: string, agents: readonly AgentView[] }): Promise<LigandEntry[]> {
  const [rows, versions] = await Promise.all([listLigandRows(db, programmeId), readVersions(db, 'ligand', programmeId)])
  const ofLigand = groupBy(agents, agent => agent.row.ligandId)
  return rows.filter(row => scope !== 'signed' || ofLigand.has(row.id)).map((row) => {
    const all = ofLigand.get(row.id) ?? []
    const own = all.filter(agent => agent.payload.metal === metal)
    const others = all.flatMap(agent => agent.evidence.map(toFact))
    return {
      key: row.code, code: row.code, origin: 'programme', payload: LigandPayload.parse(versions.find(one => one.parentId === row.id)!.payload),
      constants: others.filter(fact => isConstantWith(fact, metal)), acid: own.flatMap(agent => agent.evidence.filter(isAcid).map(toFact)), formation: own.flatMap(agent => agent.evidence.filter(isFormation).map(toFact)), others, agents: own,
    }
  })
}

const isAcid = ({ quantity }: Pick<EvidenceItemDto, 'quantity'>): boolean => quantity === 'halfLifeAcid_s'
const isFormation = ({ quantity }: Pick<EvidenceItemDto, 'quantity'>): boolean => quantity === 'formationTime99_s'
const toFact = ({ quantity, value, conditions, detail, signed, checkState, origin }: EvidenceItemDto): LigandFact => ({ quantity, value, conditions, detail, signed, checkState, recordId: origin.id, source: null })

/** The ligands of the starter library, with their published constants read as records are. */
export function libraryLigands(metal: string): LigandEntry[] {
  return LIBRARY.map((ligand) => {
    const facts = factsOf(ligand)
    const own = ligand.records.filter(record => record.metal === metal).map(record => `${ligand.key} ${record.key}`)
    return {
      key: `library:${ligand.key}`, code: ligand.code, origin: 'literature', payload: ligand.payload, agents: [], others: facts,
      constants: onePerSource(facts.filter(fact => isConstantWith(fact, metal))), acid: facts.filter(fact => isAcid(fact) && own.includes(fact.recordId)), formation: facts.filter(fact => isFormation(fact) && own.includes(fact.recordId)),
    }
  })
}

/** A competitor's constant stands in the record of every lanthanide: it is one constant. */
const onePerSource = (facts: readonly LigandFact[]): LigandFact[] => facts.filter((fact, at) => facts.findIndex(one => one.value.value === fact.value.value && one.source === fact.source) === at)

function factsOf(ligand: LibraryLigand): LigandFact[] {
  const { protonation } = ligand.payload
  const ligandProtonation = protonation && { ...protonation, steps: protonation.stepwiseLogK }
  const typed = ligand.records.flatMap(({ key, kind, metal, entry, source }) => recordKind(kind)!.emits(entry, { metal, ligandProtonation }).map(draft => fromLibrary(draft, `${ligand.key} ${key}`, source)))
  return [...typed, ...ligand.constants.map((one, at) => fromLibrary(draftOfConstant(one), `${ligand.key} constant ${at}`, one.source))]
}

const draftOfConstant = ({ ion, logK, temperature_K, ionicStrength_M, medium }: LibraryConstant): Omit<EvidenceDraft, 'covarianceGroup'> => ({
  quantity: 'logK', value: { value: logK, kind: '=', se: null, interval: null, unit: '' }, conditions: { metal: ionSymbol(ion), temperature_K, ionicStrength_M, medium }, detail: { metal: ionSymbol(ion) },
})
const fromLibrary = ({ quantity, value, conditions, detail }: Omit<EvidenceDraft, 'covarianceGroup'>, recordId: string, { citation, note }: SourceInput): LigandFact =>
  ({ quantity, value: { ...value, evidenceId: null }, conditions, detail, signed: false, checkState: null, recordId, source: [citation, note].filter(Boolean).join('. ') })

