import { faultOfBlock, faultOfSystem, type PoolSystem } from './poolSystem'
import { refuseExchange, type ExchangeRefusal } from './refusal'
import { firstReach, type Reach } from './firstReach'
import { cwSpectrum } from './spectrum'
import { protonFraction } from './transferForms'

/** Agent in the tissue: one pool, and what it does to the relaxation of water. */
export interface DetectionAgent {
  readonly shift_ppm: number
  readonly exchange_per_s: number
  /** Protons of that shift in one molecule. */
  readonly protons: number
  readonly rate1_per_s: number
  readonly rate2_per_s: number
  /** Relaxivities at the field. */
  readonly r1_per_mM_s: number
  readonly r2_per_mM_s: number
}

/** Tissue without agent. The macromolecular pool is a Lorentzian line at water: the true line is another, which matters within some ppm of water. */
export interface DetectionTissue {
  readonly rate1_per_s: number
  readonly rate2_per_s: number
  readonly macromolecules: { readonly ratio: number, readonly exchange_per_s: number, readonly t2_s: number, readonly rate1_per_s: number } | null
}

export interface DetectionSetting {
  readonly field_T: number
  readonly b1_uT: number
  readonly duration_s: number
  /** Where the irradiation is; absent: at the pool. */
  readonly offset_ppm?: number
  /** Drop of Z that counts, in points (hundredths) of the unsaturated signal. */
  readonly drop_points: number
  /** Concentrations above this are not looked at; default 100 mM. */
  readonly highest_mM?: number
}

export interface DetectionInput { readonly agent: DetectionAgent, readonly tissue: DetectionTissue, readonly setting: DetectionSetting }

/** Reached at a concentration, or the most that the drop comes to and where. */
export type Detection =
  | { readonly ok: true, readonly kind: 'reached', readonly conc_mM: number, readonly zWithout: number }
  | { readonly ok: true, readonly kind: 'notReached', readonly highestDrop_points: number, readonly at_mM: number, readonly highest_mM: number, readonly zWithout: number }

/** Common practice, no source: more is never given. */
export const HIGHEST_MM = 100
export const DETECTION_ASSUMPTIONS = 'Bloch–McConnell equations of water, the agent and a Lorentzian macromolecular pool at the place of water, constant irradiation; relaxivities as measured, added to the rates of the tissue; water protons 2 × 55.5 mol/L.'

/** Tissue with so much agent. */
export function tissueSystem({ agent, tissue, setting }: DetectionInput, conc_mM: number): PoolSystem {
  const { macromolecules } = tissue
  const own = { shift_ppm: agent.shift_ppm, rate1_per_s: agent.rate1_per_s, rate2_per_s: agent.rate2_per_s, exchange_per_s: agent.exchange_per_s, ratio: protonFraction(agent.protons, conc_mM) }
  return {
    field_T: setting.field_T, water: { rate1_per_s: tissue.rate1_per_s + agent.r1_per_mM_s * conc_mM, rate2_per_s: tissue.rate2_per_s + agent.r2_per_mM_s * conc_mM },
    solutes: macromolecules ? [own, { shift_ppm: 0, rate1_per_s: macromolecules.rate1_per_s, rate2_per_s: 1 / macromolecules.t2_s, exchange_per_s: macromolecules.exchange_per_s, ratio: macromolecules.ratio }] : [own],
  }
}

const oneOffset = new Float64Array(1)
const oneValue = new Float64Array(1)

/** Z of the tissue with so much agent, at the offset of the setting. */
export function tissueZ(input: DetectionInput, conc_mM: number): number {
  oneOffset[0] = input.setting.offset_ppm ?? input.agent.shift_ppm
  return cwSpectrum(tissueSystem(input, conc_mM), input.setting, oneOffset, oneValue)[0]!
}

/** What is outside the domain; null when nothing is. */
export function findDetectionProblem(input: DetectionInput): ExchangeRefusal | null {
  const { agent, setting } = input
  if (!(agent.protons > 0 && agent.protons < Infinity)) return refuseExchange('badProtons', `The pool has ${agent.protons} protons.`, 'A number above 0.')
  if (![agent.r1_per_mM_s, agent.r2_per_mM_s].every(r => r >= 0 && r < Infinity)) return refuseExchange('badRelaxivity', 'A relaxivity of the agent is below 0 or not a number.', 'Relaxivities not below 0.')
  const t2 = input.tissue.macromolecules?.t2_s
  if (t2 !== undefined && !(t2 > 0)) return refuseExchange('badTissue', `T2 of the macromolecules is ${t2} s.`, 'A time above 0 s.')
  const fault = faultOfSystem(tissueSystem(input, 0)) ?? faultOfBlock(setting)
  if (fault !== null) return refuseExchange('badSystem', fault, 'Numbers inside their domain.')
  if (!(setting.b1_uT > 0)) return refuseExchange('noB1', 'Without B1 nothing is saturated.', 'A B1 above 0 µT.')
  if (!Number.isFinite(setting.offset_ppm ?? 0)) return refuseExchange('badOffset', 'The offset is not a number.', 'An offset in ppm.')
  if (!(setting.drop_points > 0 && setting.drop_points < 100)) return refuseExchange('badDrop', `The drop asked for is ${setting.drop_points} points.`, 'Above 0 and below 100 points.')
  const highest = setting.highest_mM ?? HIGHEST_MM
  return highest > 0 && highest < Infinity ? null : refuseExchange('badHighest', `The highest concentration is ${highest} mM.`, 'A concentration above 0 mM.')
}

/**
 * Smallest concentration at which Z(without agent) − Z at the agent's offset reaches the drop asked for. The agent's own relaxation works against it (R1 fills what
 * saturation empties) and with it (R2 widens the line of water), so that the drop may pass a maximum: "not reached" is an answer.
 * @source rearranged steady state as in Magn. Reson. Med. 53, 790 (2005), from memory, for the idea of a detection limit; the equations are those of `cwSpectrum`
 */
export function detectionConcentration(input: DetectionInput): Detection | ExchangeRefusal {
  const problem = findDetectionProblem(input)
  if (problem) return problem
  const zWithout = tissueZ(input, 0)
  const highest_mM = input.setting.highest_mM ?? HIGHEST_MM
  return told(firstReach(conc => zWithout - tissueZ(input, conc), input.setting.drop_points / 100, highest_mM), zWithout, highest_mM)
}

function told(reach: Reach, zWithout: number, highest_mM: number): Detection {
  return reach.kind === 'reached'
    ? { ok: true, kind: 'reached', conc_mM: reach.conc_mM, zWithout }
    : { ok: true, kind: 'notReached', highestDrop_points: 100 * reach.highest, at_mM: reach.at_mM, highest_mM, zWithout }
}

/**
 * Smallest concentration at which two states of an agent (two pH, two temperatures) differ by so many points at the offset: what resolves the step between them.
 * @param other what differs in the second state
 */
export function resolvingConcentration(input: DetectionInput, other: Partial<DetectionAgent>): Detection | ExchangeRefusal {
  const offset_ppm = input.setting.offset_ppm ?? input.agent.shift_ppm
  const first = { ...input, setting: { ...input.setting, offset_ppm } }
  const second = { ...first, agent: { ...input.agent, ...other } }
  const problem = findDetectionProblem(first) ?? findDetectionProblem(second)
  if (problem) return problem
  const highest_mM = input.setting.highest_mM ?? HIGHEST_MM
  return told(firstReach(conc => Math.abs(tissueZ(first, conc) - tissueZ(second, conc)), input.setting.drop_points / 100, highest_mM), tissueZ(first, 0), highest_mM)
}
