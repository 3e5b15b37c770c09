/** Agents for tests of the placement, made of published constants and of plain invented ones. */
import { readFileSync } from 'node:fs'
import type { AgentEvidence, EvidenceItem } from '#shared/science/placement/types'

interface Figure { value: number }
const read = <T>(path: string): T => JSON.parse(readFileSync(new URL(`../../../fixtures/reference/${path}`, import.meta.url), 'utf8')) as T
const stability = read<{ ligands: Record<string, { protonation: number[], logK: Record<string, Figure> }> }>('stability/published.json')
const kinetics = read<{ rates: Record<string, Figure>, k0_GdDOTA: Figure }>('kinetics/published.json')

let count = 0

/** One signed item; ids rise in the order of making. */
export function item(quantity: string, value: number, more: Partial<EvidenceItem> = {}): EvidenceItem {
  count++
  return {
    id: `e${String(count).padStart(6, '0')}`, quantity, value, kind: '=', se: null, interval: null, unit: '', conditions: {}, signed: true, batchId: null, covarianceGroup: null, ...more,
  }
}

export const AT_PROFILE = { medium: 'plasma', temperature_K: 310.15, b0_T: 3, pH: 7.4 } as const

export const relaxivity = (value: number, more: Partial<EvidenceItem> = {}): EvidenceItem =>
  item('r1_per_mM_s', value, { unit: 'mM⁻¹ s⁻¹', se: 0.02 * value, conditions: AT_PROFILE, batchId: 'b1', ...more })

export const rateItem = (quantity: string, value: number, more: Partial<EvidenceItem> = {}): EvidenceItem =>
  item(quantity, value, { se: 0.05 * value, conditions: { temperature_K: 310.15 }, parameters: { pHMin: 1, pHMax: 8 }, ...more })

export function agent(code: string, evidence: EvidenceItem[], more: Partial<AgentEvidence> = {}): AgentEvidence {
  return { complexId: `id-${code}`, code, mechanism: 'T1', topology: 'ring', evidence, ...more }
}

/** A whole agent with a given dissociation rate and relaxivity. */
export const simpleAgent = (code: string, kd_per_s: number, r1: number, more: EvidenceItem[] = []): AgentEvidence =>
  agent(code, [relaxivity(r1), rateItem('k0_per_s', kd_per_s), item('freeMetal_frac', 1e-5, { kind: '<', batchId: 'b1' }), ...more])

/** r1 in plasma at 3 T and 37 °C, mM⁻¹ s⁻¹ [Rohrer et al., Invest. Radiol. 40, 715 (2005), from memory]. */
const R1_PLASMA = { 'DTPA': 3.7, 'DTPA-BMA': 4.0, 'DOTA': 3.5, 'HP-DO3A': 3.7 } as const
export type PublishedLigand = keyof typeof R1_PLASMA

const RATES: Readonly<Record<PublishedLigand, readonly (readonly [string, string])[]>> = {
  'DTPA': [['k1_per_M_s', 'k1_GdDTPA'], ['kCu_per_M_s', 'kM_GdDTPA_kCu'], ['kZn_per_M_s', 'kM_GdDTPA_kZn']],
  'DTPA-BMA': [['k1_per_M_s', 'k1_GdDTPA-BMA'], ['kCu_per_M_s', 'kM_GdDTPA-BMA_kCu'], ['kZn_per_M_s', 'kM_GdDTPA-BMA_kZn']],
  'DOTA': [['k1_per_M_s', 'k1_GdDOTA_c']],
  'HP-DO3A': [['k1_per_M_s', 'k1_GdHPDO3A_a']],
}

/** The Gd complex of a published ligand: constants at 25 °C, not carried, as the sources give no activation enthalpy. */
export function publishedAgent(ligand: PublishedLigand): AgentEvidence {
  const { protonation, logK } = stability.ligands[ligand]!
  const at25 = { conditions: { temperature_K: 298.15 }, se: null }
  return agent(`Gd-${ligand}`, [
    relaxivity(R1_PLASMA[ligand]),
    ...RATES[ligand].map(([quantity, key]) => rateItem(quantity, kinetics.rates[key]!.value, at25)),
    ...(ligand === 'DOTA' ? [rateItem('k0_per_s', kinetics.k0_GdDOTA.value, at25)] : []),
    item('logK', logK.Gd!.value, { se: 0.1, parameters: { metal: 'Gd', protonation } }),
    ...(['Ca', 'Zn', 'Cu'] as const).map(metal => item('logK', logK[metal]!.value, { parameters: { metal } })),
  ], { topology: ligand.startsWith('DTPA') ? 'openChain' : 'ring' })
}
