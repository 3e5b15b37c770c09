/**
 * Titration curves as the refinement reads them: at every point the totals of all components, how they move with the volume added, and −log10 [H⁺].
 * A batch ("out-of-cell") series, where each point is a flask of its own left to settle, is the same without the volume.
 */
import { pcHFromReading, type Electrode } from './electrode'

interface CurveBase {
  readonly label: string
  /** Standard deviation of one reading, in the unit of the readings. */
  readonly sigma_reading: number
  /** Present where readings are mV; without it they are −log10 [H⁺]. */
  readonly electrode?: Electrode
  readonly readings: readonly number[]
}

export interface VolumetricCurve extends CurveBase {
  readonly kind: 'volumetric'
  readonly vessel_mL: number
  /** In the vessel before any titrant, mmol, by component. H counts all acid protons, those that the ligand brings along included. */
  readonly initial_mmol: Readonly<Record<string, number>>
  /** In the titrant, mol/L, by component; a strong base is H below zero, its carbonate is CO3. */
  readonly titrant_M: Readonly<Record<string, number>>
  readonly volumes_mL: readonly number[]
  readonly sigma_mL: number
  /** Refine the acid in the vessel along with the constants (an amount that is rarely known to the last 0.2 %). */
  readonly refineAcid?: boolean
}

export interface BatchCurve extends CurveBase {
  readonly kind: 'batch'
  /** One set of totals per flask, mol/L. */
  readonly totals_M: readonly Readonly<Record<string, number>>[]
}

export type TitrationCurve = VolumetricCurve | BatchCurve

export interface CurvePoints {
  readonly label: string
  /** Components present in this curve. */
  readonly components: readonly string[]
  /** Totals, mol/L, and their slope with volume, mol/L per mL: [point][component]. */
  readonly totals_M: readonly Float64Array[]
  readonly perMl_M: readonly Float64Array[]
  /** ∂ total of H / ∂ acid in the vessel, per mL; null where the acid is not refined. */
  readonly acidFactor: Float64Array | null
  readonly pcH: Float64Array
  readonly sigma_pcH: number
  readonly sigma_mL: number
}

export interface CurveRefused {
  readonly ok: false
  readonly reason: 'lengthMismatch' | 'notFinite' | 'outOfDomain' | 'unknownComponent' | 'emptyAtPoint' | 'badSigma'
  readonly message: string
  readonly accepted: string
}

const refuse = (reason: CurveRefused['reason'], message: string, accepted: string): CurveRefused => ({ ok: false, reason, message, accepted })

/** Checks a curve and lays it out, or says which point is wrong and what would be accepted. */
export function layOut(curve: TitrationCurve, components: readonly string[]): CurvePoints | CurveRefused {
  const count = curve.kind === 'batch' ? curve.totals_M.length : curve.volumes_mL.length
  if (count !== curve.readings.length) return refuse('lengthMismatch', `${curve.label}: ${count} ${curve.kind === 'batch' ? 'flasks' : 'volumes'} stand against ${curve.readings.length} readings.`, 'One reading for each.')
  if (!(curve.sigma_reading > 0 && curve.sigma_reading < Infinity)) return refuse('badSigma', `${curve.label}: the error of a reading is ${curve.sigma_reading}.`, 'An error above 0, in the unit of the readings.')
  const pcH = Float64Array.from(curve.readings, value => curve.electrode ? pcHFromReading(curve.electrode, value) : value)
  const bad = pcH.findIndex(value => !(value >= 0 && value <= 14))
  if (bad >= 0) return refuse('outOfDomain', `${curve.label}, point ${bad + 1}: the reading ${curve.readings[bad]} is no pH from 0 to 14.`, 'pH from 0 to 14, or mV with the electrode that was calibrated for them.')
  const problem = curve.kind === 'volumetric' ? volumeProblem(curve) : null
  if (problem) return problem
  const listed = new Set(curve.kind === 'batch' ? curve.totals_M.flatMap(one => Object.keys(one)) : [...Object.keys(curve.initial_mmol), ...Object.keys(curve.titrant_M)])
  const stranger = [...listed].find(name => !components.includes(name))
  if (stranger !== undefined) return refuse('unknownComponent', `${curve.label}: ${stranger} is no component of the system.`, `Amounts of ${components.join(', ')}.`)
  const rows = curve.kind === 'batch' ? batchRows(curve, components) : volumeRows(curve, components)
  return finish(curve, components, { ...rows, pcH })
}

function volumeProblem(curve: VolumetricCurve): CurveRefused | null {
  const bad = curve.volumes_mL.findIndex(v => !(v >= 0 && v < Infinity))
  if (bad >= 0) return refuse('outOfDomain', `${curve.label}, point ${bad + 1}: ${curve.volumes_mL[bad]} mL.`, 'Volumes of 0 mL or more.')
  if (!(curve.vessel_mL > 0 && curve.vessel_mL < Infinity)) return refuse('outOfDomain', `${curve.label}: the vessel holds ${curve.vessel_mL} mL.`, 'A volume above 0 mL.')
  return curve.sigma_mL >= 0 && curve.sigma_mL < Infinity ? null : refuse('badSigma', `${curve.label}: the error of a volume is ${curve.sigma_mL} mL.`, '0 mL or more.')
}

interface Rows { totals_M: Float64Array[], perMl_M: Float64Array[] }

function volumeRows(curve: VolumetricCurve, components: readonly string[]): Rows {
  const totals_M = curve.volumes_mL.map(v => Float64Array.from(components, name => ((curve.initial_mmol[name] ?? 0) + (curve.titrant_M[name] ?? 0) * v) / (curve.vessel_mL + v)))
  const perMl_M = curve.volumes_mL.map((v, i) => Float64Array.from(components, (name, k) => ((curve.titrant_M[name] ?? 0) - totals_M[i]![k]!) / (curve.vessel_mL + v)))
  return { totals_M, perMl_M }
}

function batchRows(curve: BatchCurve, components: readonly string[]): Rows {
  return {
    totals_M: curve.totals_M.map(one => Float64Array.from(components, name => one[name] ?? 0)),
    perMl_M: curve.totals_M.map(() => new Float64Array(components.length)),
  }
}

function finish(curve: TitrationCurve, components: readonly string[], rows: Rows & { pcH: Float64Array }): CurvePoints | CurveRefused {
  const present = components.filter((name, k) => name === 'H' || rows.totals_M.some(row => row[k] !== 0))
  for (const [i, row] of rows.totals_M.entries()) {
    for (const name of present) {
      const total = row[components.indexOf(name)]!
      if (!Number.isFinite(total)) return refuse('notFinite', `${curve.label}, point ${i + 1}: the total of ${name} is not a number.`, 'Finite amounts.')
      if (name !== 'H' && total < 0) return refuse('outOfDomain', `${curve.label}, point ${i + 1}: the total of ${name} is negative.`, 'Totals of 0 or more; only H may be negative, for a base.')
      if (name !== 'H' && total === 0) return refuse('emptyAtPoint', `${curve.label}, point ${i + 1} holds no ${name}, other points do.`, 'Leave out the points before it was added.')
    }
  }
  const take = (row: Float64Array) => Float64Array.from(present, name => row[components.indexOf(name)]!)
  const volumetric = curve.kind === 'volumetric' ? curve : null
  return {
    label: curve.label, components: present, totals_M: rows.totals_M.map(take), perMl_M: rows.perMl_M.map(take), pcH: rows.pcH,
    acidFactor: volumetric?.refineAcid ? Float64Array.from(volumetric.volumes_mL, v => 1 / (volumetric.vessel_mL + v)) : null,
    sigma_pcH: curve.electrode ? curve.sigma_reading / Math.abs(curve.electrode.slope_mV) : curve.sigma_reading, sigma_mL: volumetric?.sigma_mL ?? 0,
  }
}

/** Carbonate as a component CO3, 25 °C and 0.1 M (from memory, ±0.05); no CO2 leaves the vessel in this model. */
export const CARBONATE_SPECIES = [
  { name: 'HCO3', stoichiometry: { CO3: 1, H: 1 }, logBeta: 9.9 },
  { name: 'H2CO3', stoichiometry: { CO3: 1, H: 2 }, logBeta: 16.05 },
] as const
