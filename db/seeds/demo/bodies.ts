import { RegisterAgentInput } from '../../../shared/schemas/agent'
import { BatchPayload } from '../../../shared/schemas/batch'
import type { DemoAgent, DemoBatch } from './agents'

const DETECTION_LIMIT_FRAC = 2e-5

/** What the form of a batch would hold. */
export function batchPayload(batch: DemoBatch): BatchPayload {
  return BatchPayload.parse({
    date: batch.date, purity_frac: 0.96, water_frac: 0.03, counterIon: 'Na+', excessLigand_frac: 0.01, isomerRatio: null, hplcPurity_frac: 0.985, concentrationBasis: 'icp',
    totalMetal: { conc_mM: 24.6, se_mM: 0.37, method: 'icp' }, note: batch.note,
    freeMetal: batch.freeMetal && {
      ...batch.freeMetal, se_frac: batch.freeMetal.kind === '=' ? batch.freeMetal.value_frac * 0.06 : null, detectionLimit_frac: Math.min(DETECTION_LIMIT_FRAC, batch.freeMetal.value_frac), method: 'xylenol orange, pH 5.8',
    },
  })
}

/** What the form that registers ligand, complex and first batch would hold. */
export function agentBody(agent: DemoAgent, batch: DemoBatch): RegisterAgentInput {
  const { ligand } = agent
  return RegisterAgentInput.parse({
    ligand: {
      kind: 'new', code: ligand.code,
      payload: {
        name: ligand.name, smiles: ligand.smiles, donors: ligand.donors, denticity: ligand.denticity, topology: ligand.topology, charge: ligand.charge, note: null,
        protonation: ligand.protonation && {
          stepwiseLogK: ligand.protonation.map(value => ({ value, se: 0.04 })), temperature_K: 298.15, ionicStrength_M: 0.1, medium: 'NMe4Cl', source: 'Invented for the demonstration',
        },
      },
    },
    complex: {
      code: agent.code,
      payload: {
        metal: agent.metal, q: agent.q, qSource: 'luminescence of the Eu analogue, invented for the demonstration', molarMass_g_per_mol: agent.molarMass_g_per_mol, charge: agent.charge,
        mechanism: agent.mechanism, analogueNote: 'q is that of the Eu analogue',
      },
    },
    batch: { lot: batch.lot, payload: batchPayload(batch) },
  })
}
