import type { WithError } from '../../science/exchange/asymmetry'
import type { ExpectedPool } from '../../science/exchange/spectrumFlags'
import { protonFraction } from '../../science/exchange/transferForms'
import type { AnalysisInput, Conditions } from '../types'
import { processScans, type ProcessedScan, type ScanOutcome, type ShiftChoice } from './processScan'
import { factsOf, numberOr, scansOf, type TubeFacts } from './scans'

/** Tubes with the same solution at the same temperature: their spectra are read together. */
export interface Sample {
  /** '20 mM, pH 7.4, 25 °C'. */
  readonly label: string
  readonly conc_mM: number
  readonly facts: TubeFacts
  readonly r1w: WithError | null
  /** Exchanging protons over water's, where their number is known. */
  readonly x: WithError | null
  readonly r2s_per_s: number | null
  /** Mz at the start of saturation over equilibrium. */
  readonly start: number
  readonly outcomes: readonly ScanOutcome[]
  readonly scans: readonly ProcessedScan[]
}

export const poolOf = (conditions: Conditions): ExpectedPool => ({ offset_ppm: numberOr(conditions.poolOffset_ppm) ?? NaN, width_ppm: numberOr(conditions.poolWidth_ppm) ?? NaN })

/** Samples of a series in the order of their first tubes; blanks, references and tubes left out make none. */
export function samplesOf({ tubes, conditions, exclusions }: AnalysisInput, shift: ShiftChoice): Sample[] {
  const groups = new Map<string, typeof tubes[number][]>()
  for (const tube of tubes.filter(one => one.role === 'sample')) {
    const { pH, temperature_K, r1w_per_s } = factsOf(tube, conditions)
    const key = JSON.stringify([tube.conc_mM, pH, temperature_K, r1w_per_s])
    groups.set(key, [...groups.get(key) ?? [], tube])
  }
  return [...groups.values()].map((own) => {
    const [tube] = own as [typeof own[number]]
    const facts = factsOf(tube, conditions)
    const outcomes = processScans(own.flatMap(one => scansOf(one, conditions, exclusions)), poolOf(conditions), shift)
    const r1w = facts.r1w_per_s === null ? null : { value: facts.r1w_per_s, se: numberOr(conditions.r1wSe_per_s) || null }
    const recovery = numberOr(conditions.recovery_s)
    return {
      label: labelOf(tube.conc_mM, facts), conc_mM: tube.conc_mM, facts, r1w, x: fractionOf(tube, conditions), r2s_per_s: numberOr(conditions.r2s_per_s),
      start: recovery === null || r1w === null ? 1 : 1 - Math.exp(-r1w.value * recovery), outcomes, scans: outcomes.filter(one => one.ok),
    }
  })
}

function labelOf(conc_mM: number, { pH, temperature_K }: TubeFacts): string {
  return [`${Number(conc_mM.toPrecision(4))} mM`, pH === null ? null : `pH ${pH}`, temperature_K === null ? null : `${Number((temperature_K - 273.15).toFixed(1))} °C`].filter(part => part !== null).join(', ')
}

function fractionOf({ conc_mM, concSe_mM }: AnalysisInput['tubes'][number], conditions: Conditions): WithError | null {
  const protons = numberOr(conditions.protons)
  if (protons === null || !(conc_mM > 0)) return null
  const value = protonFraction(protons, conc_mM)
  const relative = Math.hypot((concSe_mM ?? 0) / conc_mM, numberOr(conditions.concScaleError_frac) ?? 0)
  return { value, se: relative > 0 ? value * relative : null }
}
