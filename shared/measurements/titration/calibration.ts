import type { NamedQuantity } from '../../evidence/quantity'
import { studentFactor } from '../../science/least-squares/line'
import { calibrateElectrode, type Calibration, type CalibrationName, type CalibrationRefused } from '../../science/titration/calibrate'
import type { Electrode } from '../../science/titration/electrode'
import { leftOutOf } from '../relaxation/exclusions'
import type { AnalysisInput, Flag, SeriesTube, TubeResult } from '../types'
import { planOf, type CurvePlan } from './curveOf'
import { chosen } from './options'

/** A curve of strong acid, calibrated: what it says of the electrode and of the base. */
export interface CalibratedCurve {
  readonly plan: CurvePlan
  readonly found: Calibration | null
  /** Titre found over titre stated. */
  readonly titre: number | null
  readonly result: TubeResult
}

const MV = 'mV'
const PARTS: readonly { name: CalibrationName, label: string, unit: string }[] = [
  { name: 'e0_mV', label: 'E°', unit: MV }, { name: 'slope_mV', label: 'Slope', unit: MV }, { name: 'end_mL', label: 'Titre of the base', unit: 'mM' }, { name: 'pKw', label: 'pK_w', unit: '' },
  { name: 'junctionAcid_mV_per_M', label: 'Junction in acid', unit: 'mV M^-1' }, { name: 'junctionBase_mV_per_M', label: 'Junction in base', unit: 'mV M^-1' },
]

/** Name of a count that tells a figure in what the readings of a curve are. */
export const READINGS = { mV: 'readings_mV', pH: 'readings_pH', batch: 'flasks_pH' } as const

export const plainQuantity = (name: string, label: string, unit: string, value: number, se: number | null = null, interval: [number, number] | null = null): NamedQuantity =>
  ({ name, label, unit, value, kind: '=', se, interval, evidenceId: null })

export function calibrateCurve(tube: SeriesTube, input: AnalysisInput): CalibratedCurve {
  const plan = planOf(tube, input.conditions)
  const left = leftOutOf(tube, input.exclusions)
  const used = plan.rows.filter(row => !left.points.has(row.index))
  const found = calibrate(plan, used, input)
  const points = plan.rows.map((row) => {
    const at = found.ok ? used.indexOf(row) : -1
    const residual = at < 0 || !found.ok ? null : found.residuals_mV[at]!
    return { index: row.index, x: row.added_mL, y: row.reading, fitted: residual === null ? null : row.reading - residual, residual, studentised: null, excluded: left.points.get(row.index) ?? null }
  })
  const count = plainQuantity(READINGS[plan.readings], 'Readings', '', plan.rows.length)
  const base = {
    tubeNo: tube.tubeNo, label: tube.label, role: tube.role, conc_mM: tube.conc_mM, excluded: left.tube, points, passed: [], secondOpinion: null,
    curve: points.flatMap(({ x, fitted }) => fitted === null ? [] : [{ x, y: fitted }]),
  }
  if (!found.ok) return { plan, found: null, titre: null, result: { ...base, headline: null, parameters: [count], refusal: { reason: found.reason, message: found.message, accepted: found.accepted }, flags: [], statistics: null } }
  const parameters = partsOf(found, used.length)
  const dof = used.length - parameters.length
  return {
    plan, found: left.tube === null ? found : null, titre: found.base_M * 1000 / used[0]!.base_mM!,
    result: {
      ...base, headline: parameters[0]!, parameters: [...parameters, ...(found.reducedChi2 === null ? [] : [plainQuantity('reducedChi2', 'Reduced chi-square', '', found.reducedChi2)]), ...(found.carbonate_M === null ? [] : [plainQuantity('carbonate_mM', 'Carbonate by Gran', 'mM', found.carbonate_M * 1000)]), count],
      refusal: null, flags: found.warnings.map((sentence): Flag => ({ id: 'electrode', title: 'Look at the electrode', sentence, tubeNo: tube.tubeNo })), intervalMethod: `Student t, ${dof} degrees of freedom`,
      statistics: null,
    },
  }
}

/** What was refined of the electrode; the end point is told as the titre of the base. */
function partsOf(found: Calibration, count: number): NamedQuantity[] {
  const refined = PARTS.filter(({ name }) => found.se[name] !== null)
  const factor = studentFactor(0.95, count - refined.length)
  return refined.map(({ name, label, unit }) => {
    if (name === 'end_mL') {
      const base_mM = found.base_M * 1000
      const base_se = base_mM * found.se.end_mL! / found.end_mL
      return plainQuantity('base_mM', label, unit, base_mM, base_se, [base_mM - factor * base_se, base_mM + factor * base_se])
    }
    const value = found.electrode[name]
    const se = found.se[name]!
    return plainQuantity(name, label, unit, value, se, [value - factor * se, value + factor * se])
  })
}

function calibrate(plan: CurvePlan, rows: CurvePlan['rows'], input: AnalysisInput): Calibration | CalibrationRefused {
  const { temperature_K, pKw } = input.conditions
  const [first] = rows
  if (plan.readings === 'pH') return { ok: false, reason: 'badRun', message: 'Readings in pH calibrate nothing: they are calibrated already.', accepted: 'readings in mV, or the curve put aside' }
  if (!first || plan.isBatch) return { ok: false, reason: 'badRun', message: plan.isBatch ? 'Amounts differ from row to row: this is no titration of one vessel.' : 'Every point is left out.', accepted: 'one vessel with strong acid, titrated with strong base' }
  return calibrateElectrode({
    acid_mmol: first.acid_mM! * first.vessel_mL! / 1000, vessel_mL: first.vessel_mL!, volumes_mL: rows.map(row => row.added_mL), readings_mV: rows.map(row => row.reading),
    sigma_mV: Number(chosen(input, 'sdE')), sigma_mL: Number(chosen(input, 'sdVolume')) / 1000, temperature_K: Number(temperature_K),
  }, Number(pKw))
}

/** The same calibration with one of its parameters moved, for the error that it hands on. */
export function moved(one: CalibratedCurve, name: CalibrationName, by: number): CalibratedCurve {
  const found = one.found!
  if (name !== 'end_mL') return { ...one, found: { ...found, electrode: { ...found.electrode, [name]: found.electrode[name] + by } } }
  const share = found.end_mL / (found.end_mL + by)
  return { ...one, titre: one.titre! * share, found: { ...found, base_M: found.base_M * share } }
}

/** The electrode of a curve: of the last calibration before it, else of the first after it, else the one typed. null where there is none. */
export function electrodeOf(tubeNo: number, calibrations: readonly CalibratedCurve[], { conditions }: AnalysisInput): { electrode: Electrode, titre: number } | null {
  const good = calibrations.filter(one => one.found !== null)
  const own = good.filter(one => one.plan.tubeNo < tubeNo).at(-1) ?? good[0]
  if (own) return { electrode: own.found!.electrode, titre: own.titre! }
  const { e0_mV, slope_mV, pKw } = conditions
  if (typeof e0_mV !== 'number' || typeof slope_mV !== 'number') return null
  return { electrode: { e0_mV, slope_mV, junctionAcid_mV_per_M: 0, junctionBase_mV_per_M: 0, pKw: Number(pKw) }, titre: 1 }
}
