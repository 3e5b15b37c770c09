import type { NamedQuantity } from '../../evidence/quantity'
import { HIGHEST_MM, type DetectionInput } from '../../science/exchange/detection'
import { drawDetection } from '../../science/exchange/detectionDraws'
import type { AnalysisInput, Flag } from '../types'
import { numberOr } from './scans'

/** What the conditions must hold before a concentration in tissue can be worked out. */
const NEEDED = ['detectDrop_points', 'detectB1_uT', 'detectTsat_s', 'tissueRate1_per_s', 'tissueRate2_per_s', 'agentR1_per_mM_s', 'agentR2_per_mM_s', 'protons', 'b0_T', 'poolOffset_ppm'] as const
/** Longitudinal rate of bound protons, which hardly acts. Common practice, no source. */
const POOL_RATE1_per_s = 1
const NEGLECTED_per_s = 1e-3

export interface DetectedInTissue { readonly quantity: NamedQuantity | null, readonly flags: readonly Flag[], readonly text: string }

/**
 * Smallest concentration whose drop can be seen in the tissue typed, at the exchange rate found, with its interval by draws. A bound where it is not reached; null where the conditions do not
 * say enough.
 */
export function detectInTissue({ conditions, seed }: Pick<AnalysisInput, 'conditions' | 'seed'>, k: NamedQuantity): DetectedInTissue | null {
  const given = NEEDED.map(key => numberOr(conditions[key]))
  if (given.some(value => value === null)) return null
  const [drop_points, b1_uT, duration_s, rate1_per_s, rate2_per_s, r1_per_mM_s, r2_per_mM_s, protons, field_T, shift_ppm] = given as [number, number, number, number, number, number, number, number, number, number]
  const [ratio, mtExchange, t2_s] = ['mtRatio', 'mtExchange_per_s', 'mtT2_s'].map(key => numberOr(conditions[key])) as [number | null, number | null, number | null]
  const macromolecules = ratio !== null && mtExchange !== null && t2_s !== null ? { ratio, exchange_per_s: mtExchange, t2_s, rate1_per_s: POOL_RATE1_per_s } : null
  const input: DetectionInput = {
    agent: { shift_ppm, exchange_per_s: k.value, protons, rate1_per_s: POOL_RATE1_per_s, rate2_per_s: Math.max(numberOr(conditions.r2s_per_s) ?? 0, NEGLECTED_per_s), r1_per_mM_s, r2_per_mM_s },
    tissue: { rate1_per_s, rate2_per_s, macromolecules }, setting: { field_T, b1_uT, duration_s, drop_points },
  }
  const flags: Flag[] = macromolecules === null ? [{ id: 'noMacromolecules', title: 'Tissue without macromolecules', tubeNo: null, sentence: 'The concentration in tissue was worked out without a macromolecular pool, which lowers what an agent can add: it is the best case. Type ratio, exchange rate and T2 of the pool.' }] : []
  const drawn = drawDetection(input, { agent: { exchange_per_s: k.se }, b1_frac: numberOr(conditions.b1Error_frac) }, { seed })
  if (!drawn.ok) return { quantity: null, flags: [...flags, { id: 'noDetection', title: 'No concentration in tissue', sentence: `${drawn.message} Needed: ${drawn.accepted}`, tubeNo: null }], text: drawn.message }
  const { point, quantiles_mM: { low, high }, logSe, reached_frac } = drawn
  const base = { name: 'workingConcentration_mM', label: 'c_{w}', unit: 'mM', evidenceId: null }
  const setting = `a drop of ${drop_points} points at ${b1_uT} µT for ${duration_s} s`
  if (point.kind === 'notReached') {
    return { quantity: { ...base, value: HIGHEST_MM, kind: '>', se: null, interval: null }, flags, text: `Not reached up to ${HIGHEST_MM} mM: ${setting} was asked for, the most is ${point.highestDrop_points.toPrecision(2)} points at ${point.at_mM.toPrecision(2)} mM.` }
  }
  const open = reached_frac < 1 ? ` In ${(100 * (1 - reached_frac)).toPrecision(2)} % of the draws it is not reached.` : ''
  return {
    quantity: { ...base, value: point.conc_mM, kind: '=', se: logSe === null || high === null ? null : point.conc_mM * logSe, interval: low === null || high === null ? null : [low, high] }, flags,
    text: `${point.conc_mM.toPrecision(3)} mM for ${setting}, the agent's own relaxivities counted.${open}`,
  }
}
