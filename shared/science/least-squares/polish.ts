import { factorQr, measureColumns, numericalRank, solveNewton } from './factor'
import { sumOfSquares, takeTrial, type Search } from './workspace'

/**
 * Gauss–Newton steps by QR from the minimum found, as long as each is shorter than the one before. The search stops on the sum of squares,
 * which is flat to the second order: the parameters then hold half the digits, and these steps bring the rest.
 */
export function polish(search: Search): void {
  const { ws, problem, options } = search
  let previous = Infinity
  for (let turn = 0; turn < options.polishSteps; turn++) {
    const { current, trial } = search
    measureColumns(ws, current, problem.lower, problem.upper)
    if (ws.freeCount === 0) return
    factorQr(ws, current)
    if (numericalRank(ws) < ws.freeCount) return
    solveNewton(ws, ws.freeCount)
    const length = relativeStep(search)
    if (!(length < 0.95 * previous) || length < 1e-15) return
    previous = length
    trial.p.set(current.p)
    for (let c = 0; c < ws.freeCount; c++) trial.p[ws.free[c]!]! -= ws.newton[c]!
    if (!isInside(search)) return
    problem.evaluate(trial.p, trial.residual, trial.jacobian)
    search.evaluations++
    trial.sum = sumOfSquares(trial.residual)
    // The last digits of a sum of squares are rounding: a rise of 1e-9 is no worse point.
    if (!(trial.sum <= current.sum * (1 + 1e-9) + Number.MIN_VALUE)) return
    takeTrial(search)
  }
}

function relativeStep({ ws, current }: Search): number {
  let largest = 0
  for (let c = 0; c < ws.freeCount; c++) {
    largest = Math.max(largest, Math.abs(ws.newton[c]!) / (Math.abs(current.p[ws.free[c]!]!) || 1))
  }
  return largest
}

function isInside({ problem, trial }: Search): boolean {
  for (let j = 0; j < problem.m; j++) {
    if (trial.p[j]! < problem.lower[j]! || trial.p[j]! > problem.upper[j]!) return false
  }
  return true
}

/**
 * How far the end point is from a minimum: length of the residual's projection on the free columns over the length of the residual, or 0 when
 * the Gauss–Newton step no longer changes the parameters (an exact fit has a residual of rounding only, and no direction).
 * @source Bates & Watts, Technometrics 23, 179 (1981): relative offset
 */
export function stationarity(search: Search): number {
  const { ws, problem, current } = search
  const cosine = measureColumns(ws, current, problem.lower, problem.upper)
  if (!Number.isFinite(cosine)) return Infinity
  if (ws.freeCount === 0) return 0
  factorQr(ws, current)
  const rank = numericalRank(ws)
  solveNewton(ws, rank)
  if (relativeStep(search) < 1e-10) return 0
  let square = 0
  for (let c = 0; c < rank; c++) square += ws.qtr[c]! * ws.qtr[c]!
  return Math.sqrt(square / current.sum)
}
