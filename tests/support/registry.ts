import type { Actor } from '../../shared/permissions'
import { RegisterAgentInput } from '../../shared/schemas/agent'
import { SourceInput } from '../../shared/schemas/source'
import type { RecordEntry } from '../../shared/evidence/records/entry'
import type { Deps } from '../../server/platform/deps'
import { enterRecord } from '../../server/services/enterRecord'
import { registerAgent } from '../../server/services/registerAgent'
import { signEvidence } from '../../server/services/signEvidence'
import { submitForCheck } from '../../server/services/submitForCheck'
import type { TestProgramme } from './factory'

export const RING = 'OC(=O)CN1CCN(CC(O)=O)CCN(CC(O)=O)CCN(CC(O)=O)CC1'
export const CHAIN = 'OC(=O)CN(CCN(CC(O)=O)CC(O)=O)CCN(CC(O)=O)CC(O)=O'

export interface AgentSketch { code?: string, ligandCode?: string, smiles?: string, topology?: 'ring' | 'openChain', metal?: string, lot?: string, mechanism?: string, freeMetal?: unknown, protonation?: unknown, ligandIsRegistered?: boolean }

/** The body of the form that registers an agent: a gadolinium complex of a ring ligand unless said otherwise. */
export function agentBody(sketch: AgentSketch = {}): RegisterAgentInput {
  const { code = 'TS-01', ligandCode = `${code}-L`, smiles = RING, topology = 'ring', metal = 'Gd', lot = 'L1', mechanism = 'T1', freeMetal = null, protonation = null, ligandIsRegistered = false } = sketch
  return RegisterAgentInput.parse({
    ligand: ligandIsRegistered
      ? { kind: 'existing', code: ligandCode }
      : {
          kind: 'new', code: ligandCode,
          payload: { name: 'a test ligand', smiles, donors: [{ element: 'N', kind: 'amine N', count: 4 }, { element: 'O', kind: 'carboxylate O', count: 4 }], denticity: 8, topology, charge: -4, protonation, note: null },
        },
    complex: { code, payload: { metal, q: 1, qSource: 'luminescence of the Eu analogue', molarMass_g_per_mol: 557.6, charge: -1, mechanism, analogueNote: null } },
    batch: {
      lot,
      payload: {
        date: '2026-02-20', purity_frac: 0.97, water_frac: 0.02, counterIon: 'Na+', excessLigand_frac: 0.01, isomerRatio: null, hplcPurity_frac: 0.985, concentrationBasis: 'icp',
        totalMetal: { conc_mM: 10.4, se_mM: 0.12, method: 'icp' }, freeMetal, note: null,
      },
    },
  })
}

export const SOURCE = SourceInput.parse({ citation: 'A test source, 2026', origin: 'own' })

/** Registers an agent as the programme's chemist. */
export const register = (deps: Deps, programme: TestProgramme, sketch: AgentSketch = {}) =>
  registerAgent(deps, { actor: programme.people.chemist, programmeId: programme.id, body: agentBody(sketch) })

/** Types a record as the programme's chemist. */
export const enter = (deps: Deps, programme: TestProgramme, { agent, kind, entry }: { agent: string, kind: string, entry: RecordEntry }) =>
  enterRecord(deps, { actor: programme.people.chemist, programmeId: programme.id, body: { kind, agent, lot: null, entry, source: SOURCE } })

/** Sends a record or batch version for checking and signs it as the programme's physicist. */
export async function sign(deps: Deps, programme: TestProgramme, kind: 'record' | 'batchVersion', id: string, signer: Actor = programme.people.physicist): Promise<void> {
  await submitForCheck(deps, { actor: programme.people.chemist, programmeId: programme.id, kind, id, expectedSeq: 0, comment: '' })
  await signEvidence(deps, { actor: signer, programmeId: programme.id, kind, id, expectedSeq: 1, comment: '' })
}
