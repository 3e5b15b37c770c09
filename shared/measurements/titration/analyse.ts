import { leftOutOf } from '../relaxation/exclusions'
import { leftOutText } from '../relaxation/methodText'
import type { AnalysedPoint, AnalysisInput, AnalysisOutcome, Flag, SeriesTube, TubeResult } from '../types'
import { calibrateCurve, electrodeOf, plainQuantity, READINGS, type CalibratedCurve } from './calibration'
import { withCalibrationErrors } from './calibrationErrors'
import { constantsOf, correlationTable } from './constants'
import { curveOf, planOf, unusable, type CurvePlan, type TitrationRow, type Weighing } from './curveOf'
import { conditionalQuantities } from './evidence'
import { titrationFlags } from './flags'
import { methodText } from './methodText'
import { chosen } from './options'
import { refineSystem, type RefinedSystem } from './refined'
import { systemOf, type Refusal } from './system'
import { pcHFromReading, type Electrode } from '../../science/titration/electrode'

/** A curve with ligand: which of its rows enter, and by which electrode they are read. */
interface Opened { readonly tube: SeriesTube, readonly plan: CurvePlan, readonly weighing: Weighing & { electrode: Electrode | null }, readonly used: readonly TitrationRow[], readonly excluded: string | null, readonly why: ReadonlyMap<number, string> }

/** Calibrates, refines over all curves together, and tells every curve with its residuals. */
export function analyseTitration(input: AnalysisInput): AnalysisOutcome {
  const calibrations = input.tubes.filter(tube => tube.conc_mM === 0).map(tube => calibrateCurve(tube, input))
  const opened = input.tubes.filter(tube => tube.conc_mM !== 0).map(tube => openCurve(tube, input, calibrations))
  const refused = (refusal: Refusal): AnalysisOutcome => ({ ok: false, reason: refusal.reason, message: refusal.message, accepted: refusal.accepted, tubes: inOrder(input, calibrations, opened.map(one => refusedCurve(one, refusal))) })
  const blind = opened.find(one => one.excluded === null && one.plan.readings === 'mV' && one.weighing.electrode === null)
  if (blind) return refused({ ok: false, reason: 'noElectrode', message: `${blind.plan.label} is in mV, and no electrode is calibrated.`, accepted: 'a curve of strong acid with strong base that can be calibrated, or E° and slope among the conditions' })
  const counted = opened.filter(one => one.excluded === null && one.used.length > 0)
  if (counted.length === 0) return refused({ ok: false, reason: 'noCurve', message: 'No curve with ligand is left.', accepted: 'one curve or more that is not left out' })
  const pKw = pKwOf(input, calibrations)
  const planned = systemOf(input, counted.map(one => one.plan), pKw)
  if ('ok' in planned) return refused(planned)
  const curvesOf = (some: readonly CalibratedCurve[]) => counted.map(one => openCurve(one.tube, input, some)).map(one => curveOf(one.plan, one.used, one.weighing))
  const refined = refineSystem(planned, curvesOf(calibrations))
  if (!refined.ok) return refused(refined)
  const done = withCalibrationErrors(refined, calibrations, some => ({ curves: curvesOf(some), pKw: pKwOf(input, some) }))
  const ofML = done.open.find(one => one.name === 'ML')
  if (ofML?.kind === 'none') return refused({ ok: false, reason: 'notDeterminable', message: 'The curves look alike whatever log K of ML is.', accepted: 'points where part of the metal is bound: more acid, or a competing ligand' })
  return told(input, { calibrations, opened, counted, done, protons: planned.protons, pKw })
}

export interface Told { readonly calibrations: readonly CalibratedCurve[], readonly opened: readonly Opened[], readonly counted: readonly Opened[], readonly done: RefinedSystem, readonly protons: number, readonly pKw: number }

function told(input: AnalysisInput, all: Told): AnalysisOutcome {
  const { calibrations, opened, counted, done } = all
  const curves = opened.map(one => counted.includes(one) ? fittedCurve(one, done, counted.indexOf(one)) : unfittedCurve(one))
  const constants = constantsOf(done, all.protons)
  const headline = constants.find(one => one.name === 'logK' && !one.label.endsWith('held')) ?? constants.find(one => one.se !== null) ?? constants[0]!
  const parameters = [headline, ...constants.filter(one => one !== headline), ...conditionalQuantities(constants, done, input)]
  const { fit } = done
  const points = counted.reduce((sum, one) => sum + one.used.length, 0)
  return {
    ok: true, tubes: inOrder(input, calibrations, curves), passed: done.open.length === 0 ? ['Every refined constant is determined: chi-square rises on both sides.'] : [], flags: titrationFlags(input, all),
    method: `${methodText(input, all)}${leftOutText(input)}`,
    series: {
      headline, parameters, line: [], band: [], correlation: correlationTable(done),
      points: curves.filter(tube => tube.headline !== null).map((tube, i) => ({ tubeNo: tube.tubeNo, label: tube.label, x: i + 1, y: tube.headline!.value, ySe: null, fitted: 0, studentised: null, cook: null, leaveOneOut: null, excluded: tube.excluded })),
      statistics: [
        { label: 'Reduced chi-square', value: fit.reducedChi2, text: fit.reducedChi2 === null ? 'no degrees of freedom' : String(Number(fit.reducedChi2.toPrecision(3))) }, { label: 'Degrees of freedom', value: fit.dof, text: String(fit.dof) },
        { label: 'Points', value: points, text: `${points} of ${counted.length} ${counted.length === 1 ? 'curve' : 'curves'}` }, { label: 'pKw', value: all.pKw, text: String(Number(all.pKw.toPrecision(5))) },
      ],
    },
  }
}

/** Calibrated in base, an electrode brings its own pKw; without, the one stated counts. */
function pKwOf({ conditions }: AnalysisInput, calibrations: readonly CalibratedCurve[]): number {
  const own = calibrations.find(one => one.found !== null && one.found.se.pKw !== null)
  return own ? own.found!.electrode.pKw : Number(conditions.pKw)
}

function openCurve(tube: SeriesTube, input: AnalysisInput, calibrations: readonly CalibratedCurve[]): Opened {
  const { conditions } = input
  const plan = planOf(tube, conditions)
  const left = leftOutOf(tube, input.exclusions)
  const own = electrodeOf(tube.tubeNo, calibrations, input)
  const weighing = {
    electrode: plan.readings === 'mV' ? own?.electrode ?? null : null, titre: chosen(input, 'titre') === 'calibrated' ? own?.titre ?? 1 : 1, carbonate_mM: typeof conditions.carbonate_mM === 'number' ? conditions.carbonate_mM : 0,
    ligandProtons: Number(conditions.ligandProtons), sdPH: Number(chosen(input, 'sdPH')), sdE_mV: Number(chosen(input, 'sdE')), sdVolume_mL: Number(chosen(input, 'sdVolume')) / 1000, refineAcid: chosen(input, 'acid') === 'refine',
  }
  const why = new Map(plan.rows.flatMap((row) => { const reason = left.points.get(row.index) ?? unusable(row, weighing); return reason === null ? [] : [[row.index, reason] as const] }))
  return { tube, plan, weighing, excluded: left.tube, why, used: plan.rows.filter(row => !why.has(row.index)) }
}

const pcHOf = ({ plan, weighing }: Opened, row: TitrationRow): number => plan.readings === 'mV' && weighing.electrode ? pcHFromReading(weighing.electrode, row.reading) : row.reading

/** Parts that every curve has, its readings as pH where an electrode gives one. */
function baseOf(one: Opened, tell: (row: TitrationRow) => Pick<AnalysedPoint, 'fitted' | 'residual' | 'studentised'>): Omit<TubeResult, 'headline' | 'refusal'> {
  const { tube, plan, why, excluded } = one
  const areRead = plan.rows.every(row => Number.isFinite(pcHOf(one, row)))
  const points = plan.rows.map((row): AnalysedPoint => ({ index: row.index, x: plan.isBatch ? row.index + 1 : row.added_mL, y: areRead ? pcHOf(one, row) : row.reading, ...tell(row), excluded: why.get(row.index) ?? null }))
  const inMV = plan.readings === 'mV' && (!areRead || one.weighing.electrode === null)
  return {
    tubeNo: tube.tubeNo, label: tube.label, role: tube.role, conc_mM: tube.conc_mM, excluded, points, passed: [], flags: [], statistics: null, secondOpinion: null,
    curve: plan.isBatch ? [] : points.flatMap(({ x, fitted }) => fitted === null ? [] : [{ x, y: fitted }]).sort((a, b) => a.x - b.x),
    parameters: [plainQuantity(inMV ? READINGS.mV : plan.isBatch ? READINGS.batch : READINGS.pH, plan.isBatch ? 'Flasks' : 'Readings', '', plan.rows.length)],
  }
}

const NOT_FITTED = () => ({ fitted: null, residual: null, studentised: null })
const refusedCurve = (one: Opened, { reason, message, accepted }: Refusal): TubeResult => ({ ...baseOf(one, NOT_FITTED), headline: null, refusal: { reason, message, accepted } })
const unfittedCurve = (one: Opened): TubeResult => ({ ...baseOf(one, NOT_FITTED), headline: null, refusal: { reason: 'leftOut', message: one.excluded === null ? 'Every point is left out.' : 'The curve is left out.', accepted: 'the curve put back' } })

function fittedCurve(one: Opened, { fit }: RefinedSystem, at: number): TubeResult {
  const curve = fit.curves[at]!
  const base = baseOf(one, (row) => {
    const i = one.used.indexOf(row)
    return i < 0 ? NOT_FITTED() : { fitted: curve.fitted_pcH[i]!, residual: curve.residuals_pcH[i]!, studentised: curve.studentised[i]! }
  })
  const rms = Math.sqrt(curve.residuals_pcH.reduce((sum, r) => sum + r * r, 0) / curve.residuals_pcH.length)
  const acid = curve.acid_mmol === null ? [] : [{ ...plainQuantity('acidFound_mmol', 'Acid found beyond the stated', 'mmol', curve.acid_mmol), se: curve.acidSe_mmol }]
  const headline = plainQuantity('rms_pH', 'RMS residual', 'pH', rms)
  return { ...base, headline, refusal: null, parameters: [headline, ...acid, ...base.parameters], flags: farPoints(one, curve.studentised) }
}

/** Single points that the fit cannot have. */
function farPoints({ tube, plan }: Opened, studentised: readonly (number | null)[]): Flag[] {
  const far = studentised.filter(value => value !== null && Math.abs(value) > 4).length
  return far === 0 || plan.isBatch ? [] : [{ id: 'farPoints', title: 'Points far off', sentence: `${far} ${far === 1 ? 'point lies' : 'points lie'} more than four standard deviations off the curve. Look for a slow point, a bubble, or a species that is missing.`, tubeNo: tube.tubeNo }]
}

function inOrder({ tubes }: AnalysisInput, calibrations: readonly CalibratedCurve[], curves: readonly TubeResult[]): TubeResult[] {
  const all = [...calibrations.map(one => one.result), ...curves]
  return tubes.map(tube => all.find(one => one.tubeNo === tube.tubeNo)!)
}
