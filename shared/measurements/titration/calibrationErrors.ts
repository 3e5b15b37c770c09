import { correlationOf } from '../../science/least-squares/covariance'
import { studentFactor } from '../../science/least-squares/line'
import type { TitrationCurve } from '../../science/titration/curves'
import { refineConstants } from '../../science/titration/refine'
import { moved, type CalibratedCurve } from './calibration'
import type { RefinedSystem } from './refined'
import { withValues } from './system'

interface Rebuilt { readonly curves: readonly TitrationCurve[], readonly pKw: number }

/**
 * Adds to the covariance of the constants what the calibrations hand on: J·C·Jᵀ, with C the covariance of a calibration and J how the constants move with its
 * parameters, by refining again with each moved by its standard error up and down. Calibrations that no curve is read by move nothing.
 */
export function withCalibrationErrors(done: RefinedSystem, calibrations: readonly CalibratedCurve[], rebuild: (calibrations: readonly CalibratedCurve[]) => Rebuilt): RefinedSystem {
  const { fit } = done
  if (fit.covariance === null) return done
  const names = fit.constants.map(one => one.name)
  const total = fit.covariance.map(row => [...row])
  for (const one of calibrations.filter(each => each.found !== null)) {
    const { refined, covariance, se } = one.found!
    if (covariance === null) return withoutErrors(done)
    const slopes = refined.map((name) => {
      const step = se[name]!
      const [up, down] = [step, -step].map(by => constantsAt(done, rebuild(calibrations.map(each => each === one ? moved(each, name, by) : each))))
      return up && down ? names.map((_, r) => (up[r]! - down[r]!) / (2 * step)) : null
    })
    if (slopes.some(slope => slope === null)) return withoutErrors(done)
    for (const [a, row] of total.entries()) {
      for (const b of row.keys()) row[b]! += slopes.reduce((sum, left, i) => sum + slopes.reduce((inner, right, j) => inner + left![a]! * covariance[i]![j]! * right![b]!, 0), 0)
    }
  }
  const half = studentFactor(0.95, (fit.reducedChi2 ?? 1) > 1 ? fit.dof : null)
  const constants = fit.constants.map((one, r) => {
    const se = one.se === null ? null : Math.sqrt(total[r]![r]!)
    return { ...one, se, interval: se === null ? null : [one.logBeta - half * se, one.logBeta + half * se] as const }
  })
  return { ...done, fit: { ...fit, constants, covariance: total, correlation: correlationOf(total) } }
}

/** log β refined from where they stand; null where the moved calibration has no least sum. */
function constantsAt({ system }: RefinedSystem, { curves, pKw }: Rebuilt): number[] | null {
  const fit = refineConstants(withValues(system, new Map([['OH', -pKw]])), curves)
  return fit.ok && fit.converged ? fit.constants.map(one => one.logBeta) : null
}

/** An error that lacks a part would read too small: none is told instead. */
const withoutErrors = (done: RefinedSystem): RefinedSystem => ({ ...done, fit: { ...done.fit, constants: done.fit.constants.map(one => ({ ...one, se: null, interval: null })), covariance: null, correlation: null } })
