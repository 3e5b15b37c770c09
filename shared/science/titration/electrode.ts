/**
 * A glass electrode: E = E° + s·log10 [H⁺] + j_a·[H⁺] + j_b·[OH⁻], on the concentration scale.
 * The last two are the liquid junction in strong acid and base, used only where a calibration run shows that they are there.
 */
import { GAS_J_per_mol_K } from '../constants'

export interface Electrode {
  readonly e0_mV: number
  /** mV per decade of [H⁺]; near +59.16 at 25 °C. */
  readonly slope_mV: number
  readonly junctionAcid_mV_per_M: number
  readonly junctionBase_mV_per_M: number
  readonly pKw: number
}

/** RT ln10 / F, mV per decade. */
export function nernstSlope_mV(temperature_K: number): number {
  return 1e3 * GAS_J_per_mol_K * temperature_K * Math.LN10 / 96485.33212
}

/** Reading at a given ln [H⁺], and how it moves with ln [H⁺]. */
export function readingAt(electrode: Electrode, lnH: number): { readonly reading_mV: number, readonly perLnH_mV: number } {
  const h = Math.exp(lnH)
  const oh = Math.exp(-electrode.pKw * Math.LN10 - lnH)
  const { junctionAcid_mV_per_M: acid, junctionBase_mV_per_M: base } = electrode
  return { reading_mV: electrode.e0_mV + electrode.slope_mV * lnH / Math.LN10 + acid * h + base * oh, perLnH_mV: electrode.slope_mV / Math.LN10 + acid * h - base * oh }
}

/**
 * −log10 [H⁺] from a reading, by Newton's method on log10 [H⁺].
 * @returns NaN where the reading belongs to no pH from −1 to 15
 */
export function pcHFromReading(electrode: Electrode, reading_mV: number): number {
  let lnH = (reading_mV - electrode.e0_mV) / electrode.slope_mV * Math.LN10
  for (let turn = 0; turn < 50; turn++) {
    const at = readingAt(electrode, lnH)
    const step = (reading_mV - at.reading_mV) / at.perLnH_mV
    lnH += Math.max(-2, Math.min(2, step))
    if (Math.abs(step) < 1e-13 * Math.max(1, Math.abs(lnH))) break
  }
  const pcH = -lnH / Math.LN10
  const isMet = Math.abs(readingAt(electrode, lnH).reading_mV - reading_mV) < 1e-6
  return isMet && pcH >= -1 && pcH <= 15 ? pcH : NaN
}
