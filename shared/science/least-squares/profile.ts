import { tQuantile } from '../statistics'
import type { LeastSquaresProblem, Solution } from './problem'
import { solve } from './trustRegion'

export interface ProfileInterval {
  /** Null where the sum of squares never rises enough on that side before the parameter's bound: the data set no limit there. */
  readonly low: number | null
  readonly high: number | null
}

/**
 * Interval of one parameter from the profile of the sum of squares: the values at which, with all others fitted anew, it has risen by t²·s². Unlike
 * value ± t·SE it follows a bent or one-sided valley.
 * @param at position of the parameter in the problem
 * @param se its standard error, the first step outwards
 * @param variance s² (σ unknown) or the factor on σ² (σ known, residuals already divided by σ)
 * @param confidence coverage and degrees of freedom of Student's t
 * @source Bates & Watts, Nonlinear Regression Analysis and Its Applications (1988), section 6.1
 */
export function profileInterval(
  problem: LeastSquaresProblem, best: Solution, { at, se, variance }: { at: number, se: number, variance: number }, confidence: { level: number, dof: number },
): ProfileInterval {
  const rise = tQuantile((1 + confidence.level) / 2, confidence.dof) ** 2 * variance
  const side = (direction: 1 | -1) => findLimit({ problem, best, at, step: direction * se * Math.sqrt(rise / variance), target: best.sumOfSquares + rise })
  return { low: side(-1), high: side(1) }
}

interface Search {
  readonly problem: LeastSquaresProblem
  readonly best: Solution
  readonly at: number
  readonly step: number
  readonly target: number
}

function findLimit({ problem, best, at, step, target }: Search): number | null {
  const centre = best.parameters[at]!
  const edge = step > 0 ? problem.upper[at]! : problem.lower[at]!
  let inner = centre
  let innerExcess = best.sumOfSquares - target
  let start = best.parameters
  let outer = centre
  for (let turn = 0; ; turn++) {
    outer = step > 0 ? Math.min(edge, centre + step * 1.6 ** turn) : Math.max(edge, centre + step * 1.6 ** turn)
    const held = solveHeld(problem, at, outer, start)
    if (held.sum >= target) return closeIn({ problem, best, at, step, target }, [inner, innerExcess], [outer, held.sum - target], start)
    if (outer === edge || turn > 40) return null
    inner = outer
    innerExcess = held.sum - target
    start = held.parameters
  }
}

/** Regula falsi with halved stale ends between a point below the target and one above. */
function closeIn({ problem, at, target }: Search, below: [number, number], above: [number, number], start: Float64Array): number {
  let [[a, fa], [b, fb]] = [below, above]
  for (let turn = 0; turn < 60; turn++) {
    const x = (a * fb - b * fa) / (fb - fa)
    const excess = solveHeld(problem, at, x, start).sum - target
    if (Math.abs(excess) <= 1e-10 * target || Math.abs(b - a) <= 1e-12 * Math.abs(x)) return x
    if (excess < 0) {
      [a, fa] = [x, excess]
      fb /= 2
    } else {
      [b, fb] = [x, excess]
      fa /= 2
    }
  }
  return (a + b) / 2
}

/** Lowest sum of squares with one parameter held. */
function solveHeld(problem: LeastSquaresProblem, at: number, value: number, start: Float64Array): { sum: number, parameters: Float64Array } {
  const { n, m } = problem
  const others = Array.from({ length: m }, (_, j) => j).filter(j => j !== at)
  const p = start.slice()
  p[at] = value
  const full = new Float64Array(n * m)
  const reduced: LeastSquaresProblem = {
    n, m: m - 1, lower: Float64Array.from(others, j => problem.lower[j]!), upper: Float64Array.from(others, j => problem.upper[j]!),
    evaluate(q, residual, jacobian) {
      others.forEach((j, c) => { p[j] = q[c]! })
      problem.evaluate(p, residual, full)
      others.forEach((j, c) => jacobian.set(full.subarray(j * n, (j + 1) * n), c * n))
    },
  }
  const solution = solve(reduced, others.map(j => start[j]!), { polishSteps: 0 })
  const parameters = start.slice()
  parameters[at] = value
  others.forEach((j, c) => { parameters[j] = solution.parameters[c]! })
  return { sum: solution.sumOfSquares, parameters }
}
