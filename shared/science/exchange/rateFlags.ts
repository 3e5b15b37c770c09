import type { WithError } from './asymmetry'
import type { OmegaPlot } from './omegaPlot'
import type { ExchangeFlag } from './spectrumFlags'
import type { TransferFit } from './transferFit'
import { saturationEfficiency } from './transferForms'

/** What a rate was found from, beside the fit itself. */
export interface RateConditions {
  readonly b1s_uT: readonly number[]
  /** Saturation times used at steady state; the shortest counts. */
  readonly tsat_s: readonly number[]
  /** Null = not known: then nobody can say whether the state was steady. */
  readonly r1w_per_s: number | null
  readonly r2s_per_s: number | null
  /** Z opposite the pool at each B1: 1 less this is direct saturation, and a broad background. Null where it was not measured. */
  readonly opposite: readonly number[] | null
}

const STEADY = 5
const DIRECT = 0.05
const percent = (fraction: number): string => `${(100 * fraction).toPrecision(2)} %`

/** Flags of the conditions that every method at steady state shares, by the rate it found. */
export function conditionFlags(k_per_s: number, { b1s_uT, tsat_s, r1w_per_s, r2s_per_s, opposite }: RateConditions, needs: { readonly steady: boolean, readonly overB1: boolean }): ExchangeFlag[] {
  const flags: ExchangeFlag[] = []
  const shortest = Math.min(...tsat_s)
  if (needs.steady && r1w_per_s === null) flags.push({ id: 'steadyUnknown', title: 'Steady state not shown', sentence: 'R1w is not known, so nothing says that the saturation of water had come to rest. Type R1w or measure it on the same tubes.' })
  else if (needs.steady && r1w_per_s! * shortest < STEADY) flags.push({ id: 'notSteady', title: 'Not at steady state', sentence: `R1w·tsat is ${(r1w_per_s! * shortest).toPrecision(2)}, below 5: k comes out too high, by about 17 % at 1 and 2 % at 3. Saturate for ${(STEADY / r1w_per_s!).toPrecision(2)} s or more, or use the build-up form.` })
  const alphas = b1s_uT.map(b1_uT => saturationEfficiency(k_per_s, { b1_uT, r2s_per_s: r2s_per_s ?? 0 }))
  const [least, most] = [Math.min(...alphas), Math.max(...alphas)]
  if (needs.overB1 && !(least < 0.5 && most > 0.5)) flags.push({ id: 'alphaNotBracketed', title: 'B1 range too narrow', sentence: `The pool is saturated to between ${percent(least)} and ${percent(most)}: the range does not bracket half saturation, so k rests on the shape of one end. Add ${most <= 0.5 ? 'stronger' : 'weaker'} B1.` })
  const direct = opposite === null ? null : 1 - Math.min(...opposite)
  if (direct !== null && direct > DIRECT) flags.push({ id: 'directSaturation', title: 'Direct saturation', sentence: `Opposite the pool Z falls to ${(1 - direct).toFixed(3)}: direct saturation or a broad background of ${percent(direct)}, above 5 %. Use the inverse metric, weaker B1 or a higher field.` })
  if (r2s_per_s === null) flags.push({ id: 'r2sNeglected', title: 'R2 of the pool not known', sentence: 'R2 of the pool was taken as 0: k comes out too high by about half of it.' })
  return flags
}

/** Flags of a fit over B1 or saturation time. */
export function transferFlags(fit: TransferFit, conditions: RateConditions, known: { readonly x: WithError | null }): ExchangeFlag[] {
  const isSteady = fit.form !== 'buildUp'
  const b1Count = new Set(conditions.b1s_uT).size
  const flags = conditionFlags(fit.k_per_s.value, conditions, { steady: isSteady, overB1: b1Count > 1 })
  if (fit.form === 'inverse') flags.splice(0, flags.length, ...flags.filter(one => one.id !== 'directSaturation'))
  if (fit.alternatives_per_s.length > 0) flags.push({ id: 'twoRates', title: 'Two rates fit', sentence: `k of ${fit.alternatives_per_s.map(k => k.toPrecision(3)).join(' or ')} s⁻¹ fits as well as ${fit.k_per_s.value.toPrecision(3)} s⁻¹: k·α is the same on both sides of half saturation. Measure at a second B1.` })
  if (b1Count === 1) {
    const alpha = saturationEfficiency(fit.k_per_s.value, { b1_uT: conditions.b1s_uT[0]!, r2s_per_s: conditions.r2s_per_s ?? 0 })
    if (alpha > 0.25 && alpha < 0.75) flags.push({ id: 'nearTurn', title: 'Near half saturation', sentence: `The pool is saturated to ${percent(alpha)}, where x·k·α hardly changes with k: small errors of the fraction become large errors of k. Use a B1 about three times as strong.` })
  }
  if (fit.atBound) flags.push({ id: 'rateAtBound', title: 'At the edge of the search', sentence: 'The best rate or fraction lies at the edge of what was searched (0.1 to 10⁶ s⁻¹): the readings set no value. Widen the range of B1.' })
  const { x } = fit
  if (x !== null && known.x !== null && x.value !== known.x.value) {
    const ratio = x.value / known.x.value
    const spread = Math.hypot((x.se ?? 0) / x.value, (known.x.se ?? 0) / known.x.value)
    if (Math.abs(ratio - 1) > Math.max(0.2, 2 * spread)) flags.push({ id: 'protonsDisagree', title: 'Protons do not add up', sentence: `The fit finds ${ratio.toPrecision(2)} times the exchanging protons that concentration and formula give. Check concentration, number of protons, B1 and whether other sites exchange.` })
  }
  return flags
}

/** Flags of an omega plot: the conditions, and whether the line is one. */
export function omegaFlags(plot: OmegaPlot, conditions: RateConditions, readings: { readonly mtrRex: readonly number[] | null }): ExchangeFlag[] {
  const flags = conditionFlags(plot.apparent_per_s.value, conditions, { steady: true, overB1: true }).filter(one => plot.form === 'plain' || one.id !== 'directSaturation')
  if (plot.line.quadraticP !== null && plot.line.quadraticP < 0.05) flags.push({ id: 'omegaCurved', title: 'Omega plot is curved', sentence: `A quadratic term improves the line (p = ${plot.line.quadraticP.toPrecision(2)}): direct saturation, a saturation too short, or a second pool. Leave out the strongest B1 and look again.` })
  const { opposite } = conditions
  if (plot.form === 'plain' && opposite !== null && readings.mtrRex !== null) {
    const share = Math.max(...opposite.map((z, i) => (1 / z - 1) / readings.mtrRex![i]!))
    if (share > DIRECT) flags.push({ id: 'omegaSpill', title: 'Direct saturation in the omega plot', sentence: `Direct saturation is ${percent(share)} of the transfer, and raises k by up to about as much; the more dilute the pool, the more. Use the inverse omega plot.` })
  }
  if (plot.leftOut.length > 0) flags.push({ id: 'omegaLeftOut', title: 'Readings without an ordinate', sentence: `${plot.leftOut.length} reading${plot.leftOut.length > 1 ? 's have' : ' has'} no place in the plot (${plot.leftOut[0]!.reason}).` })
  return flags
}

export interface MethodRate { readonly method: string, readonly k_per_s: WithError }

/** Pairs of methods that differ by more than twice their combined error and by more than 5 %. Methods share their data: the combined error is the larger of the two. */
export function disagreements(rates: readonly MethodRate[]): { readonly pair: readonly [string, string], readonly sentence: string }[] {
  return rates.flatMap((a, i) => rates.slice(i + 1).flatMap((b) => {
    const difference = Math.abs(a.k_per_s.value - b.k_per_s.value)
    const mean = (a.k_per_s.value + b.k_per_s.value) / 2
    if (a.k_per_s.se === null || b.k_per_s.se === null) return []
    const error = Math.max(a.k_per_s.se, b.k_per_s.se)
    if (!(difference > 2 * error && difference > 0.05 * mean)) return []
    const show = (one: MethodRate) => `${one.method} gives ${one.k_per_s.value.toPrecision(3)} ± ${one.k_per_s.se!.toPrecision(2)} s⁻¹`
    return [{ pair: [a.method, b.method] as const, sentence: `${show(a)}, ${show(b)}: they differ by ${percent(difference / mean)}, more than their errors. See which assumption fails.` }]
  }))
}
