import { fitLine } from '../least-squares/line'
import { tTwoSidedP } from '../statistics'
import type { RelaxivityTube } from './relaxivity'

/** Intercept predicted by the tubes with agent, against the measured blank. */
export interface BlankAgreement {
  readonly intercept_per_s: number
  /** Mean rate of the blanks. */
  readonly blank_per_s: number
  readonly difference_per_s: number
  /** Null where either error is unknown. */
  readonly se_per_s: number | null
  /** Two-sided p of no difference; null as above. */
  readonly p: number | null
}

/** Compares the line through the tubes with agent with the blanks it does not contain; null where there is nothing to compare. */
export function compareWithBlank(tubes: readonly RelaxivityTube[], rate_per_s: readonly number[], rateSe_per_s: readonly number[] | null): BlankAgreement | null {
  const isBlank = tubes.map(tube => tube.isBlank && tube.conc_mM === 0)
  const pick = (values: readonly number[], wanted: boolean) => values.filter((_, i) => isBlank[i] === wanted)
  const blanks = pick(rate_per_s, true)
  if (blanks.length === 0) return null
  const line = fitLine({ x: pick(tubes.map(tube => tube.conc_mM), false), y: pick(rate_per_s, false), sigma: rateSe_per_s && pick(rateSe_per_s, false) })
  if (!line.ok) return null
  const blank_per_s = blanks.reduce((sum, rate) => sum + rate, 0) / blanks.length
  const difference_per_s = line.intercept - blank_per_s
  const base = { intercept_per_s: line.intercept, blank_per_s, difference_per_s }
  if (line.interceptSe === null || rateSe_per_s === null || line.dof < 1) return { ...base, se_per_s: null, p: null }
  const blankSe = Math.hypot(...pick(rateSe_per_s, true)) / blanks.length
  const se_per_s = Math.hypot(line.interceptSe, blankSe)
  return { ...base, se_per_s, p: tTwoSidedP(difference_per_s / se_per_s, line.intervalDof ?? Infinity) }
}
