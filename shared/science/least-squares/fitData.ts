import { withStandards, type Model, type Settings } from '../models/define'
import type { FitRefused, RefusalReason } from './outcome'

/** Points to fit. `x` in the unit of the model's axis. */
export interface FitData {
  readonly x: readonly number[]
  readonly y: readonly number[]
  /** Known standard deviation of each point, or one for all. */
  readonly sigma?: number | readonly number[] | null
  /** Indices of points left out. */
  readonly exclude?: readonly number[]
}

/** Checked points, the left-out ones removed. */
export interface PreparedData {
  readonly ok: true
  readonly x: readonly number[]
  readonly y: readonly number[]
  /** Null when σ is not known. */
  readonly sigma: readonly number[] | null
  /** Position of each used point in the data given. */
  readonly used: readonly number[]
  readonly excluded: readonly number[]
  readonly settings: Settings
}

export function refuse(reason: RefusalReason, message: string, accepted: string): FitRefused {
  return { ok: false, reason, message, accepted }
}

/** Checks the data against the model: what no choice of parameters could mend is refused, with the place and what would be accepted. */
export function prepareData(model: Model, data: FitData, given: Settings, freeCount: number): PreparedData | FitRefused {
  const settings = withStandards(model.settings, given)
  const excluded = data.exclude ? [...new Set(data.exclude)].sort((a, b) => a - b) : []
  const problem = findShapeProblem(data, excluded) ?? findSettingProblem(model, settings)
  if (problem) return problem
  const prepared = { ok: true, ...takeUsed(data, excluded), excluded, settings } as const
  return findValueProblem(prepared) ?? findCountProblem(prepared, freeCount) ?? model.refuse(prepared.x, settings) ?? prepared
}

function takeUsed({ x, y, sigma }: FitData, excluded: readonly number[]): Pick<PreparedData, 'x' | 'y' | 'sigma' | 'used'> {
  const left = new Set(excluded)
  const used: number[] = []
  for (let i = 0; i < x.length; i++) if (!left.has(i)) used.push(i)
  const pick = (values: readonly number[]) => left.size === 0 ? values.slice() : used.map(i => values[i]!)
  const each = typeof sigma === 'number' ? x.map(() => sigma) : sigma
  return { x: pick(x), y: pick(y), sigma: each ? pick(each) : null, used }
}

function findShapeProblem({ x, y, sigma }: FitData, excluded: readonly number[]): FitRefused | null {
  if (x.length !== y.length) return refuse('lengthMismatch', `${x.length} x values stand against ${y.length} signals.`, 'One signal for each x.')
  if (sigma && typeof sigma !== 'number' && sigma.length !== x.length) {
    return refuse('lengthMismatch', `${sigma.length} standard deviations stand against ${x.length} points.`, 'One standard deviation for each point, or one for all.')
  }
  const outside = excluded.find(i => !Number.isInteger(i) || i < 0 || i >= x.length)
  if (outside !== undefined) return refuse('outOfDomain', `Point ${outside + 1} is left out but does not exist.`, `Points 1 to ${x.length}.`)
  return null
}

function findSettingProblem(model: Model, settings: Settings): FitRefused | null {
  for (const [name, { label, unit, min, max }] of Object.entries(model.settings)) {
    const value = settings[name]
    if (value === undefined) return refuse('badSetting', `${label} is not given.`, `A value from ${min} to ${max} ${unit}.`)
    if (!(value >= min && value <= max)) return refuse('badSetting', `${label} is ${value} ${unit}.`, `A value from ${min} to ${max} ${unit}.`)
  }
  return null
}

function findValueProblem({ x, y, sigma, used }: PreparedData): FitRefused | null {
  for (let i = 0; i < used.length; i++) {
    const point = used[i]!
    if (!Number.isFinite(x[i]) || !Number.isFinite(y[i])) {
      return refuse('notFinite', `Point ${point + 1}: ${Number.isFinite(x[i]) ? 'the signal' : 'x'} is not a number.`, 'Finite numbers, or the point left out.')
    }
    if (sigma && !(sigma[i]! > 0 && sigma[i]! < Infinity)) {
      return refuse('badSigma', `Point ${point + 1}: the standard deviation is ${sigma[i]}.`, 'A standard deviation above 0 for every point.')
    }
  }
  return null
}

function findCountProblem({ x, y }: PreparedData, freeCount: number): FitRefused | null {
  const needed = Math.max(freeCount, 2)
  if (x.length < needed) {
    return refuse('tooFewPoints', `${x.length} ${x.length === 1 ? 'point is' : 'points are'} left for ${freeCount} parameters.`, `At least ${needed} points; ${freeCount + 1} for an interval.`)
  }
  const distinct = new Set(x).size
  if (distinct < needed) return refuse('tooFewDistinct', `The points stand at only ${distinct} different x.`, `Points at ${needed} or more different x.`)
  if (y.every(value => value === y[0])) return refuse('constantSignal', `Every signal is ${y[0]}.`, 'Signals that change with x.')
  return null
}
