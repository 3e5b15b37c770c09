/** An electrode from a titration of strong acid with strong base: E°, slope, the titre of the base, pKw, and junction terms where the data ask for them. */
import { informationOf } from '../least-squares/covariance'
import type { LeastSquaresProblem, Solution } from '../least-squares/problem'
import { solve } from '../least-squares/trustRegion'
import { fUpperP } from '../statistics'
import { nernstSlope_mV, readingAt, type Electrode } from './electrode'
import { carbonateFromEnds, granEnd, steepest_mL, type StrongRun } from './gran'

export interface CalibrationRun extends StrongRun {
  readonly sigma_mV: number
  readonly sigma_mL: number
  readonly temperature_K: number
}

export interface Calibration {
  readonly ok: true
  readonly electrode: Electrode
  /** Standard errors by the names below; null where not refined. */
  readonly se: Readonly<Record<CalibrationName, number | null>>
  /** What was refined, and its covariance in that order; null where no errors exist. */
  readonly refined: readonly CalibrationName[]
  readonly covariance: readonly (readonly number[])[] | null
  readonly base_M: number
  readonly end_mL: number
  /** Carbonate in the base by the two Gran ends, mol/L; null where a branch is missing. */
  readonly carbonate_M: number | null
  readonly residuals_mV: readonly number[]
  readonly reducedChi2: number | null
  /** p of the junction terms by F; they are kept below 0.01. Null where not tried. */
  readonly junctionP: number | null
  readonly slopeOfNernst: number
  readonly warnings: readonly string[]
}

export interface CalibrationRefused {
  readonly ok: false
  readonly reason: 'badRun' | 'noEnd' | 'notConverged'
  readonly message: string
  readonly accepted: string
}

const NAMES = ['e0_mV', 'slope_mV', 'end_mL', 'pKw', 'junctionAcid_mV_per_M', 'junctionBase_mV_per_M'] as const
export type CalibrationName = (typeof NAMES)[number]
const JUNCTION_P = 0.01

/** Calibrates an electrode, or says what the run lacks. `pKw` is refined where the run reaches 5 points of alkaline branch, otherwise held at the value given. */
export function calibrateElectrode(run: CalibrationRun, pKw: number): Calibration | CalibrationRefused {
  const problem = runProblem(run, pKw)
  if (problem) return problem
  const jump = steepest_mL(run)
  const acidEnd = granEnd(run, nernstSlope_mV(run.temperature_K), 'acid')
  if (acidEnd === null || acidEnd.end_mL > 1.5 * Math.max(...run.volumes_mL)) {
    return { ok: false, reason: 'noEnd', message: 'The acid branch does not lead to an end point.', accepted: 'At least 3 readings in acid before the jump, with the amount of acid stated in mmol.' }
  }
  const alkaline = run.volumes_mL.filter(v => v > 1.05 * jump).length
  const free = alkaline >= 5 ? [0, 1, 2, 3] : [0, 1, 2]
  const start = [0, nernstSlope_mV(run.temperature_K), acidEnd.end_mL, pKw, 0, 0]
  start[0] = run.readings_mV[0]! - start[1]! * Math.log10(run.acid_mmol * (1 - run.volumes_mL[0]! / start[2]!) / (run.vessel_mL + run.volumes_mL[0]!))
  const plain = fitRun(run, start, free)
  if (!plain.solution.converged) return { ok: false, reason: 'notConverged', message: 'No electrode describes the readings.', accepted: 'Readings in mV that fall with the base added, volumes in mL and the acid in mmol.' }
  const more = alkaline >= 5 ? [...free, 4, 5] : [...free, 4]
  const dof = run.volumes_mL.length - more.length
  const rich = dof > 2 ? fitRun(run, plain.all, more) : null
  const junctionP = rich && rich.solution.converged ? fUpperP((plain.solution.sumOfSquares - rich.solution.sumOfSquares) / (more.length - free.length) / (rich.solution.sumOfSquares / dof), more.length - free.length, dof) : null
  const best = rich && junctionP !== null && junctionP < JUNCTION_P ? rich : plain
  return report(run, best, junctionP)
}

function runProblem(run: CalibrationRun, pKw: number): CalibrationRefused | null {
  const refuse = (message: string, accepted: string): CalibrationRefused => ({ ok: false, reason: 'badRun', message, accepted })
  const { volumes_mL, readings_mV } = run
  if (volumes_mL.length !== readings_mV.length) return refuse(`${volumes_mL.length} volumes stand against ${readings_mV.length} readings.`, 'One reading for each volume.')
  if (volumes_mL.length < 6) return refuse(`${volumes_mL.length} points; a calibration needs 6.`, 'At least 6 points on both sides of the jump.')
  const bad = volumes_mL.findIndex((v, i) => !(v >= 0 && v < Infinity) || !Number.isFinite(readings_mV[i]) || (i > 0 && !(v > volumes_mL[i - 1]!)))
  if (bad >= 0) return refuse(`Point ${bad + 1}: ${volumes_mL[bad]} mL, ${readings_mV[bad]} mV.`, 'Volumes of 0 mL or more that rise, with readings in mV.')
  for (const [what, value] of [['amount of acid', run.acid_mmol], ['volume in the vessel', run.vessel_mL], ['error of a reading', run.sigma_mV]] as const) {
    if (!(value > 0 && value < Infinity)) return refuse(`The ${what} is ${value}.`, 'A value above 0.')
  }
  if (!(run.sigma_mL >= 0 && run.sigma_mL < Infinity)) return refuse(`The error of a volume is ${run.sigma_mL} mL.`, '0 mL or more.')
  if (!(run.temperature_K > 250 && run.temperature_K < 375)) return refuse(`The temperature is ${run.temperature_K} K.`, 'A temperature in kelvin, 250 to 375 (25 °C is 298.15 K).')
  return pKw > 10 && pKw < 17 ? null : refuse(`pKw is ${pKw}.`, 'A pKw from 10 to 17, for the medium and temperature.')
}

interface RunFit { readonly solution: Solution, readonly all: readonly number[], readonly free: readonly number[] }

/** Refines the parameters numbered in `free`, weights from both errors brought up to date three times. */
function fitRun(run: CalibrationRun, start: readonly number[], free: readonly number[]): RunFit {
  let all = [...start]
  let solution: Solution | null = null
  for (let pass = 0; pass < 4; pass++) {
    const at = all
    const weights = run.volumes_mL.map(v => 1 / Math.hypot(run.sigma_mV, run.sigma_mL * slopeAlong(run, at, v)))
    const problem: LeastSquaresProblem = {
      n: weights.length, m: free.length, lower: new Float64Array(free.length).fill(-1e6), upper: new Float64Array(free.length).fill(1e6),
      evaluate: (p, residual, jacobian) => {
        const full = [...at]
        free.forEach((which, c) => { full[which] = p[c]! })
        run.volumes_mL.forEach((v, i) => {
          const { value, gradient } = modelAt(run, full, v)
          residual[i] = weights[i]! * (value - run.readings_mV[i]!)
          free.forEach((which, c) => { jacobian[c * weights.length + i] = weights[i]! * gradient[which]! })
        })
      },
    }
    solution = solve(problem, free.map(which => all[which]!))
    all = [...all]
    for (const [c, which] of free.entries()) all[which] = solution.parameters[c]!
  }
  return { solution: solution!, all, free }
}

const electrodeOf = (p: readonly number[]): Electrode => ({ e0_mV: p[0]!, slope_mV: p[1]!, pKw: p[3]!, junctionAcid_mV_per_M: p[4]!, junctionBase_mV_per_M: p[5]! })

/** Reading and its derivatives by all six parameters, [H⁺] from h − Kw/h = total. */
function modelAt(run: StrongRun, p: readonly number[], v: number): { value: number, gradient: number[], perTotal: number } {
  const total = run.acid_mmol * (1 - v / p[2]!) / (run.vessel_mL + v)
  const kw = 10 ** -p[3]!
  const root = Math.sqrt(total * total + 4 * kw)
  const h = total >= 0 ? (total + root) / 2 : 2 * kw / (root - total)
  const { reading_mV, perLnH_mV } = readingAt(electrodeOf(p), Math.log(h))
  const lnPerTotal = 1 / root
  const byEnd = run.acid_mmol * v / (p[2]! ** 2 * (run.vessel_mL + v))
  // ∂ ln h / ∂ pKw = −ln10·(Kw/h)/root, and [OH⁻] moves with Kw itself
  const byPKw = -Math.LN10 * (kw / h) * (perLnH_mV / root + p[5]!)
  return { value: reading_mV, gradient: [1, Math.log10(h), perLnH_mV * lnPerTotal * byEnd, byPKw, h, kw / h], perTotal: perLnH_mV * lnPerTotal }
}

/** mV per mL along the run, which turns the error of a volume into one of the reading. */
function slopeAlong(run: StrongRun, p: readonly number[], v: number): number {
  const total = run.acid_mmol * (1 - v / p[2]!) / (run.vessel_mL + v)
  return modelAt(run, p, v).perTotal * (-run.acid_mmol / p[2]! - total) / (run.vessel_mL + v)
}

function report(run: CalibrationRun, { solution, all, free }: RunFit, junctionP: number | null): Calibration {
  const n = run.volumes_mL.length
  const dof = n - free.length
  const reducedChi2 = dof > 0 ? solution.sumOfSquares / dof : null
  const { inverse } = informationOf(solution.jacobian, n, free.map(() => false))
  const covariance = inverse && free.map((_, a) => free.map((__, b) => inverse[a * free.length + b]! * Math.max(1, reducedChi2 ?? 1)))
  const se = Object.fromEntries(NAMES.map((name, which) => {
    const c = free.indexOf(which)
    return [name, c < 0 || covariance === null ? null : Math.sqrt(covariance[c]![c]!)]
  })) as Record<CalibrationName, number | null>
  const electrode = electrodeOf(all)
  const slopeOfNernst = electrode.slope_mV / nernstSlope_mV(run.temperature_K)
  const [acid, base] = [granEnd(run, electrode.slope_mV, 'acid'), granEnd(run, electrode.slope_mV, 'base')]
  const warnings: string[] = []
  if (slopeOfNernst < 0.95 || slopeOfNernst > 1.02) warnings.push(`The slope is ${(100 * slopeOfNernst).toFixed(1)} % of the theoretical one; 95 to 102 % is usual (common practice, no source).`)
  if (!free.includes(3)) warnings.push('pKw was held: the run has fewer than five alkaline points.')
  return {
    ok: true, electrode, se, refined: free.map(which => NAMES[which]!), covariance, base_M: run.acid_mmol / all[2]!, end_mL: all[2]!, carbonate_M: acid && base ? carbonateFromEnds(run.acid_mmol, acid.end_mL, base.end_mL) : null,
    residuals_mV: run.volumes_mL.map((v, i) => run.readings_mV[i]! - modelAt(run, all, v).value), reducedChi2, junctionP, slopeOfNernst, warnings,
  }
}
