import { levenbergMarquardt } from 'ml-levenberg-marquardt'
import type { SecondOpinion } from './outcome'
import type { LeastSquaresProblem, Solution } from './problem'

/** Fall of the sum of squares that counts as a lower minimum. */
const LOWER_BY = 1e-6
const ITERATIONS = 40
/** Relative distance of parameters within which two minima are one. */
const SAME_PLACE = 1e-2
/** From where we ended: either it falls at once or there is nothing below. */
const ITERATIONS_FROM_OURS = 10

/**
 * Asks an independent Levenberg–Marquardt program for a lower minimum, from our optimum and from the model's own start. The first shows whether we stopped
 * too early; the second, whether another valley is lower, and it ends once it is as low as ours.
 *
 * Residuals go in already multiplied by their weights (its own weighting is wrong in 5.1.0), with the analytic gradient, in parameters divided by
 * their size at our optimum (its damping is unscaled), and with a tolerance relative to our sum of squares (its own is absolute).
 * @param start the model's own start, free parameters; null when it has none
 */
export function findSecondOpinion(problem: LeastSquaresProblem, ours: Solution, start: readonly number[] | null): SecondOpinion {
  const fromOurs = runFrom(problem, ours, { from: Array.from(ours.parameters), maxIterations: ITERATIONS_FROM_OURS, errorTolerance: 0 })
  const found = start === null ? [fromOurs] : [fromOurs, fromOwnStart(problem, ours, start)]
  const best = found.reduce((a, b) => b.sumOfSquares < a.sumOfSquares ? b : a)
  // Below rounding of the residuals no sum of squares is lower than another.
  const rounding = 1e-28 * problem.n * Math.max(...ours.residual.map((_, i) => largestInRow(ours.jacobian, problem, ours.parameters, i) ** 2))
  return { agrees: !(best.sumOfSquares < ours.sumOfSquares * (1 - LOWER_BY) - rounding), ...best }
}

function largestInRow(jacobian: Float64Array, { n, m }: LeastSquaresProblem, p: Float64Array, i: number): number {
  let largest = 0
  for (let j = 0; j < m; j++) largest = Math.max(largest, Math.abs(jacobian[j * n + i]! * p[j]!))
  return largest
}

/** Down to where we are; on to the bottom where that is another place. */
function fromOwnStart(problem: LeastSquaresProblem, ours: Solution, start: readonly number[]): Found {
  const level = runFrom(problem, ours, { from: start, maxIterations: ITERATIONS, errorTolerance: ours.sumOfSquares * (1 + LOWER_BY) })
  const isOurs = level.parameters.every((value, j) => Math.abs(value - ours.parameters[j]!) <= SAME_PLACE * (Math.abs(ours.parameters[j]!) || 1))
  return isOurs || level.sumOfSquares > ours.sumOfSquares * (1 + LOWER_BY) ? level : runFrom(problem, ours, { from: level.parameters, maxIterations: ITERATIONS, errorTolerance: 0 })
}

interface Found { sumOfSquares: number, parameters: number[] }
interface Run { from: readonly number[], maxIterations: number, errorTolerance: number }

function runFrom(problem: LeastSquaresProblem, ours: Solution, { from, maxIterations, errorTolerance }: Run): Found {
  const { n, m, lower, upper } = problem
  const size = Array.from(ours.parameters, value => Math.abs(value) || 1)
  const residual = new Float64Array(n)
  const jacobian = new Float64Array(n * m)
  const p = new Float64Array(m)
  let last: readonly number[] | null = null
  const evaluate = (q: readonly number[]) => {
    if (last !== null && q.every((value, j) => value === last![j])) return
    q.forEach((value, j) => { p[j] = value * size[j]! })
    problem.evaluate(p, residual, jacobian)
    last = q.slice()
  }
  const result = levenbergMarquardt(
    { x: Array.from({ length: n }, (_, i) => i), y: new Array<number>(n).fill(0) },
    (q) => {
      const copy = q.slice()
      return (i) => {
        evaluate(copy)
        return residual[i]!
      }
    },
    {
      initialValues: from.map((value, j) => value / size[j]!),
      jacobianFunction: (q) => {
        const copy = q.slice()
        return (i) => {
          evaluate(copy)
          return size.map((s, j) => jacobian[j * n + i]! * s)
        }
      },
      minValues: size.map((s, j) => lower[j]! / s), maxValues: size.map((s, j) => upper[j]! / s),
      maxIterations, errorTolerance,
    },
  )
  return { sumOfSquares: result.parameterError, parameters: result.parameterValues.map((value, j) => value * size[j]!) }
}
